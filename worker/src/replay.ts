import { setImmediate as breathe } from 'node:timers/promises';
import { type FailureReport, type Integration, IntegrationFailure } from '@halfdeep/ocean';
import { type RunFailure } from '@halfdeep/contracts';

const SLICE_MS = 25;

/**
 * Steps a run, known to fail, on with a check at every step, and returns the report that names the first bad step and
 * cell. Null when `interrupted` says so first. Throws when the end is reached: the failure did not repeat itself.
 */
export async function replayFailure(run: Integration, interrupted: () => boolean): Promise<FailureReport | null> {
  try {
    while (run.step < run.totalSteps) {
      const began = performance.now();
      while (run.step < run.totalSteps && performance.now() - began < SLICE_MS) run.advance(1, { checkEvery: 1 });
      await breathe();
      if (interrupted()) return null;
    }
  } catch (error) {
    if (error instanceof IntegrationFailure) return error.report;
    throw error;
  }
  throw new Error(
    `The run could not go on, but a replay from the last checkpoint reached the end at step ${run.totalSteps}.`,
  );
}

/** A failure as the run shows it. `report`: the exact one of a replay, for failures of the integration. */
export function describeFailure(cause: RunFailure['cause'], message: string, report: FailureReport | null): RunFailure {
  const cell = report?.cell;
  return {
    cause,
    message,
    step: report?.step ?? null,
    day: report?.day ?? null,
    place: cell ? `${SYMBOLS[cell.variable]} at ${longitude(cell.longitudeDeg)}, ${latitude(cell.latitudeDeg)}` : null,
    lastGoodStep: report ? report.step - 1 : null,
  };
}

const SYMBOLS = { eta: 'η', u: 'u', v: 'v' };
const longitude = (degrees: number) => `${Math.abs(degrees).toFixed(2)}° ${degrees < 0 ? 'W' : 'E'}`;
const latitude = (degrees: number) => `${Math.abs(degrees).toFixed(2)}° ${degrees < 0 ? 'S' : 'N'}`;
