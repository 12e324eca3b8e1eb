export * from './experiments';
export * from './page';
export * from './people';
export * from './problem';
export * from './runs';
export * from './setup-schema';
