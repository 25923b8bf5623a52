export * from './leastSquares';
export * from './logs/logReader';
export * from './statistics';
