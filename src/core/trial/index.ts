export * from './evaluation';
export * from './motion';
