import type { Setup } from '../setup';

/** Interval of each stream, steps. */
export interface RecordSteps {
  frames: number;
  sections: number;
  moorings: number;
  budget: number;
}

/**
 * Intervals of the output streams in whole steps. Record 0 of the frames is the initial state; record k of a series
 * closes interval k, counted from the run's first step; an unfinished last interval has no record.
 * Throws RangeError when an interval is not a whole number of steps.
 */
export function recordSteps(setup: Pick<Setup, 'numerics' | 'output'>): RecordSteps {
  const { output, numerics } = setup;
  const whole = (days: number, what: string) => {
    const steps = days * numerics.stepsPerDay;
    if (!(Number.isInteger(steps) && steps > 0))
      throw new RangeError(
        `The ${what} interval must be a whole number of steps; ${days} d at ${numerics.stepsPerDay} steps a day are ${steps}.`,
      );
    return steps;
  };
  const sections = whole(output.sectionIntervalDays, 'section');
  return {
    frames: whole(output.frameIntervalDays, 'frame'),
    sections,
    moorings: whole(output.mooringIntervalDays, 'mooring'),
    budget: sections,
  };
}

/**
 * Absolute step at which a run begins and ends. A run from another run's state keeps the model time: the parent's step,
 * counted in this run's steps. Throws RangeError when that is not a whole number, or the length or the steps a day are
 * not positive whole numbers of steps.
 */
export function stepRange(setup: Pick<Setup, 'numerics' | 'start' | 'length'>): {
  startStep: number;
  totalSteps: number;
} {
  const n = setup.numerics.stepsPerDay;
  if (!(Number.isInteger(n) && n > 0))
    throw new RangeError(`Steps a day must be a positive whole number; ${n} arrived.`);
  const length = setup.length.days * n;
  if (!(Number.isInteger(length) && length > 0))
    throw new RangeError(`The length must be a whole number of steps; ${setup.length.days} d arrived.`);
  const { start } = setup;
  if (start.kind !== 'state') return { startStep: 0, totalSteps: length };
  const startStep = (start.startStep * n) / start.stepsPerDay;
  if (!(Number.isInteger(startStep) && startStep >= 0))
    throw new RangeError(
      `The start state lies at step ${start.startStep} of ${start.stepsPerDay} a day, which is no whole number of steps at ${n} a day.`,
    );
  return { startStep, totalSteps: startStep + length };
}
