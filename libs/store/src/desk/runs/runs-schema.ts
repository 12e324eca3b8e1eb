import { type SchemaPart } from '../schema';
import { ConvergenceRun } from './convergence-run';
import { Experiment } from './experiment';
import { createExperiments } from './migrations/2026.12.01T08.00.00-create-experiments';
import { createRuns } from './migrations/2026.12.01T08.00.01-create-runs';
import { createVisits } from './migrations/2026.12.01T08.00.02-create-visits';
import { createConvergenceRuns } from './migrations/2026.12.01T12.20.00-create-convergence-runs';
import { Run } from './run';
import { Visit } from './visit';

export { fairPlace, wantedOrder, type WaitingRun } from './fair-order';
export type { Descent } from './run';
export { ConvergenceRun, Experiment, Run, Visit };

/** Experiments, runs, visits, and which runs repeat another at another resolution. */
export const runsSchema: SchemaPart = {
  define: (sequelize) => {
    for (const model of [Experiment, Run, Visit, ConvergenceRun]) model.define(sequelize);
  },
  migrations: [createExperiments, createRuns, createVisits, createConvergenceRuns],
};
