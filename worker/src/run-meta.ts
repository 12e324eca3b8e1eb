import { CORE_VERSION, type Integration, recordSteps } from '@halfdeep/ocean';
import { type RunFileMeta } from '@halfdeep/store';

/** What the run file says about itself. */
export function metaOf(runId: string, integration: Integration): Omit<RunFileMeta, 'schemaVersion'> {
  const { setup, grid, startStep, totalSteps } = integration;
  return {
    runId,
    coreVersion: CORE_VERSION,
    setup,
    nx: grid.nx,
    ny: grid.ny,
    axes: {
      lonCentre: [...grid.lonCentre],
      latCentre: [...grid.latCentre],
      lonFace: [...grid.lonFace],
      latFace: [...grid.latFace],
    },
    units: { eta: 'm', u: 'm/s', v: 'm/s' },
    stepsPerDay: setup.numerics.stepsPerDay,
    startStep,
    totalSteps,
    intervals: recordSteps(setup),
    columns: {
      sections: integration.sectionColumns(),
      moorings: integration.mooringColumns(),
      budget: integration.budgetColumns(),
    },
  };
}
