export * from './sqlite';
export * from './desk/index';
export * from './run-file';
