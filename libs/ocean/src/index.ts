export * from './setup';
export * from './limits';
export type * from './preflight-types';
export type * from './integration-types';
