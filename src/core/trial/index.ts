export * from './build';
export * from './cures';
export * from './evaluate';
export * from './evaluation';
export * from './motion';
export { MOVING_BASE, movingBaseCourse } from './movingBase';
export { PlanPlace } from './planPlace';
export { type PreviewLaw, previewLaw } from './previewLaw';
