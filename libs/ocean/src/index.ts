export * from './setup';
export * from './limits';
export type * from './preflight-types';
export type * from './integration-types';
export { corvaneSetup } from './presets/corvane';
export { PRESETS, type OceanPreset } from './presets/presets';
