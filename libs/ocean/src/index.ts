export * from './setup';
export * from './limits';
export { withLaterFields } from './later-fields';
export type * from './preflight-types';
export type * from './integration-types';
export { buildGrid, planeOf } from './grid/build-grid';
export { planeGrid, isWet, type Grid, type PlaneOptions } from './grid/grid';
export { coastLongitude, landMask } from './grid/land';
export { evaluatePattern, type Stress } from './forcing/pattern';
export { seasonFactor, stressAt, DAYS_PER_YEAR, SECONDS_PER_DAY } from './forcing/season';
export { spongeDepth, spongePeakRate, spongeRates, windTaper, SPONGE_STRENGTH } from './forcing/sponges';
export { viscosityAt, viscosityMaps } from './grid/viscosity-map';
export { betaAt, coriolisAt, zonalShrink } from './grid/plane';
export { CALM, forcingFromFunctions, windForcing, type Forcing, type ForcingBasis } from './forcing/forcing';
export { modeFrequency, waveMode, hermite, type WaveFields } from './start/wave-mode';
export { createModel, setState, type InitialValues, type Model } from './stepper/model';
export { copyHistory, etaAt, fieldOf, valueAt, viewOf, type FieldPlace, type StateVariable } from './stepper/fields';
export { layoutOf, levelOffset, type Layout, type Role } from './stepper/layout';
export {
  createStepper,
  referenceStepper,
  stepModel,
  steppedBy,
  type Kernel,
  type Stepper,
  type StepperOptions,
} from './stepper/stepper';
export { sharedModule } from './kernel/shared-module';
export { shareSteps } from './kernel/share-steps';
export type { ThreadTeam } from './kernel/thread-team';
export type { StepRecorder, StepSums } from './stepper/sums';
export type { EntrainmentOptions, ModelOptions, SpongeRates, ViscosityMap } from './stepper/model-options';
export { Integration } from './integration/integration';
export { IntegrationFailure } from './integration/failure';
export { recordSteps, stepRange, type RecordSteps } from './integration/schedule';
export { snapSection, type SnappedSection } from './integration/sections';
export { snapMooring, type SnappedMooring } from './integration/moorings';
export { BasinBudget } from './integration/budget';
export { energyOf, massAnomaly, volumeNorthOf } from './integration/energy';
export { stepBudget, totalsOf, type StepBudget } from './integration/step-budget';
export { FLOW_CAUTION, FLOW_STOP, flowNumber, watchState, type Watch } from './integration/watch';
export { stabilityNumbers, type StabilityNumbers } from './integration/stability';
export { CORE_VERSION } from './integration/version';
export { setupSha256, stateSha256 } from './integration/setup-hash';
export { sin, cos, exp } from './exact/elementary';
export { corvaneFamilySetup, corvaneSetup } from './presets/corvane';
export { PRESETS, type OceanPreset } from './presets/presets';
export { diffSetups } from './describe/diff-setups';
export { describeSetup, type SetupDescription } from './describe/describe-setup';
export { fieldLabel, fieldUnit } from './describe/field-label';
export { VARIABLE_INFO, axesOf, type Points, type VariableInfo } from './derive/variable-info';
export {
  deriveColumn,
  deriveMap,
  deriveRow,
  nativesOf,
  neededColumns,
  neededRows,
  type DerivedMap,
  type NativeFields,
  type NativeLines,
  type NeededLines,
} from './derive/derive';
export { shapeOf, NATIVE_VARIABLES, type NativeVariable } from './integration/levels';
export { preflight } from './preflight/preflight';
export { proposeStepsPerDay } from './preflight/step-limits';
export { applyRemedy } from './preflight/remedies';
export { windDiagram, type WindDiagram, type WindDiagramOptions } from './describe/wind-diagram';
export {
  richardson,
  ORDER_RANGE,
  SAFETY_FACTOR,
  type ConvergenceVerdict,
  type GridConvergence,
  type Uncertainty,
} from './convergence/richardson';
export {
  hasLand,
  refinedSetup,
  type CoastChoice,
  type Refinement,
  type RefinedSection,
} from './convergence/refined-setup';
export { transportMeasures, type TransportMeasures } from './convergence/transport-measures';
export { sketchSetup, SKETCH_WORK, type Sketch } from './sketch/sketch-setup';
export { SketchRun, type SketchLine, type SketchRows } from './sketch/sketch-run';
