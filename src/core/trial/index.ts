export * from './cures';
export * from './evaluate';
export * from './evaluation';
export * from './motion';
export { type Doubt, USUAL_DOUBT } from './previewRun';
