export * from './formula';
export * from './wheelProperties';
