export * from './setup';
export * from './limits';
export type * from './preflight-types';
export type * from './integration-types';
export { corvaneSetup } from './presets/corvane';
export { PRESETS, type OceanPreset } from './presets/presets';
export { diffSetups } from './describe/diff-setups';
export { describeSetup, type SetupDescription } from './describe/describe-setup';
export { fieldLabel, fieldUnit } from './describe/field-label';
