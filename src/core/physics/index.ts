export * from './formula';
export * from './hullSection';
export * from './hydrostatics';
export * from './wheelProperties';
