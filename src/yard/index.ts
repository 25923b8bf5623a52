export * from './ground';
export { Pace } from './pace';
export { MOST_OBJECTS, type SnapshotLayout, snapshotLayout } from './snapshot';
export { openYard, YARD_STEP, Yard, type YardOutcome, type YardSetting } from './yard';
