import { linearStep } from './linear/linear-step';
import type { Model } from './model';
import { nonlinearStep } from './nonlinear/nonlinear-step';
import type { StepRecorder } from './sums';

/** Which code makes the steps; all of them give the same bits. */
export type Kernel = 'reference' | 'simd';

/** Steps a model. */
export interface Stepper {
  readonly kernel: Kernel;
  readonly threads: number;
  /** Makes `steps` steps; `recorder` gets the row sums of each, in order. */
  advance(steps: number, recorder?: StepRecorder): void;
}

/** What a caller may say about how to step; nothing of it changes a bit of the result. */
export interface StepperOptions {
  /** 'auto' (default): the fastest that this machine has and the model suits. */
  kernel?: 'auto' | Kernel;
}

/** A stepper for a model. Throws RangeError when the kernel that was asked for is not there. */
export function createStepper(model: Model, options: StepperOptions = {}): Stepper {
  const { kernel = 'auto' } = options;
  if (kernel === 'simd') throw new RangeError('The compiled kernel is not available here; use “auto” or “reference”.');
  return referenceStepper(model);
}

/** The readable stepper: plain TypeScript, any grid. */
export function referenceStepper(model: Model): Stepper {
  return {
    kernel: 'reference',
    threads: 1,
    advance: (steps, recorder) => {
      for (let n = 0; n < steps; n++) {
        stepModel(model, recorder !== undefined);
        recorder?.add(model.sums);
      }
    },
  };
}

/** One step by the reference stepper; `sums`: also write `model.sums`. */
export function stepModel(model: Model, sums = false): void {
  if (model.equations === 'nonlinear') nonlinearStep(model, sums);
  else linearStep(model, sums);
}
