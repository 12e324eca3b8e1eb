import { kernelMemory } from '../kernel/memory';
import { simdStepper } from '../kernel/simd-stepper';
import type { ThreadTeam } from '../kernel/thread-team';
import { linearStep } from './linear/linear-step';
import { PITCHES, pitchOf } from './layout';
import type { Model } from './model';
import type { ModelOptions } from './model-options';
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
  /** Lets helper threads go; what is stepped afterwards, the caller steps alone. */
  dismiss(): void;
}

/** What a caller may say about how to step; nothing of it changes a bit of the result. */
export interface StepperOptions {
  /** 'auto' (default): the fastest that this machine has and the model suits. */
  kernel?: 'auto' | Kernel;
  /** Threads that share the work of the compiled kernel; `dismiss` lets them go. */
  team?: ThreadTeam;
}

/**
 * What `createModel` needs to know so that `createStepper` with the same options finds a model that suits it: spread it
 * into the model's options.
 */
export function steppedBy(
  { kernel = 'auto', team }: StepperOptions,
  nx: number,
): Pick<ModelOptions, 'allocate' | 'threads'> {
  const threads = team?.threads ?? 1;
  return kernel === 'reference' || !PITCHES.includes(pitchOf(nx))
    ? {}
    : { allocate: kernelMemory(threads > 1), threads };
}

/**
 * A stepper for a model made with `steppedBy` the same options. Throws RangeError when the compiled kernel was asked for
 * and cannot be had: on grids wider than 4098 cells, and where WebAssembly has no SIMD.
 */
export function createStepper(model: Model, options: StepperOptions = {}): Stepper {
  const { kernel = 'auto', team } = options;
  const stepper = kernel === 'reference' ? null : simdStepper(model, team);
  if (kernel === 'simd' && !stepper)
    throw new RangeError(
      `The compiled kernel cannot step this model (${model.grid.nx} × ${model.grid.ny} cells, ${model.memory ? 'no SIMD WebAssembly here' : 'not in its memory'}); use “auto” or “reference”.`,
    );
  return stepper ?? referenceStepper(model);
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
    dismiss: () => undefined,
  };
}

/** One step by the reference stepper; `sums`: also write `model.sums`. */
export function stepModel(model: Model, sums = false): void {
  if (model.equations === 'nonlinear') nonlinearStep(model, sums);
  else linearStep(model, sums);
}
