export * from './sqlite';
