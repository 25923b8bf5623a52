export * from './scheduleCsv';
