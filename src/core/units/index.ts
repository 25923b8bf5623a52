export * from './expression';
export * from './figure';
export * from './formatting';
export * from './quantities';
