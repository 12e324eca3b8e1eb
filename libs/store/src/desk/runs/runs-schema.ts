import { type SchemaPart } from '../schema';
import { Experiment } from './experiment';
import { createExperiments } from './migrations/2026.12.01T08.00.00-create-experiments';
import { createRuns } from './migrations/2026.12.01T08.00.01-create-runs';
import { createVisits } from './migrations/2026.12.01T08.00.02-create-visits';
import { Run } from './run';
import { Visit } from './visit';

export { fairPlace, wantedOrder, type WaitingRun } from './fair-order';
export type { Descent } from './run';
export { Experiment, Run, Visit };

/** Experiments, runs and visits. */
export const runsSchema: SchemaPart = {
  define: (sequelize) => {
    for (const model of [Experiment, Run, Visit]) model.define(sequelize);
  },
  migrations: [createExperiments, createRuns, createVisits],
};
