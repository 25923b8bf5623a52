export { captureStage } from './captureStage';
export { Stage } from './Stage';
