import {
  createModel,
  createStepper,
  steppedBy,
  type Grid,
  type Model,
  type ModelOptions,
  type Stepper,
} from '@halfdeep/ocean';

// Constants that most cases share: c = √(g′H) = 2.5 m/s exactly.
export const g = 0.04;
export const H = 156.25;
export const c = 2.5;
export const beta = 2.3e-11;
export const rho0 = 1025;
/** Equatorial length √(c/β) and time 1/√(βc). */
export const L = Math.sqrt(c / beta);
export const T = 1 / Math.sqrt(beta * c);
export const DAY = 86_400;

/** min(0.6/(c √(1/dx² + 1/dy²)), 0.4/|f|max), s. */
export function commonStep(grid: Grid): number {
  const gravity = 0.6 / (c * Math.sqrt(1 / grid.dxC[0] ** 2 + 1 / grid.dy ** 2));
  const fMax = grid.f.reduce((most, f) => Math.max(most, Math.abs(f)), 0);
  return fMax > 0 ? Math.min(gravity, 0.4 / fMax) : gravity;
}

/** A nonlinear model; the layer is the common one unless said otherwise. */
export function nonlinearModel(options: Partial<ModelOptions> & Pick<ModelOptions, 'grid' | 'dt'>): Model {
  return commonModel({ ...options, equations: 'nonlinear' });
}

/** Whole number of steps, none longer than `longest`, that make up `duration`. */
export function stepsFor(duration: number, longest: number): { steps: number; dt: number } {
  const steps = Math.ceil(duration / longest);
  return { steps, dt: duration / steps };
}

/** A model with the common layer, unless the options say otherwise. */
export function commonModel(options: Partial<ModelOptions> & Pick<ModelOptions, 'grid' | 'dt'>): Model {
  return createModel({
    ...steppedBy({}, options.grid.nx),
    reducedGravity: g,
    restThickness: H,
    density: rho0,
    ...options,
  });
}

const steppers = new WeakMap<Model, Stepper>();

/** Makes `steps` steps of a model with the fastest kernel that suits it. */
export function advance(model: Model, steps = 1): void {
  let stepper = steppers.get(model);
  if (!stepper) steppers.set(model, (stepper = createStepper(model)));
  stepper.advance(steps);
}

/** Relative L2 error of found against expected. */
export function relativeL2(found: ArrayLike<number>, expected: ArrayLike<number>): number {
  let error = 0;
  let size = 0;
  for (let k = 0; k < expected.length; k++) {
    error += (found[k] - expected[k]) ** 2;
    size += expected[k] ** 2;
  }
  return Math.sqrt(error / size);
}

/** Observed order of convergence from errors at a spacing and at half of it. */
export function order(coarse: number, fine: number): number {
  return Math.log2(Math.abs(coarse) / Math.abs(fine));
}

/** Pseudo-random numbers in (−1, 1), the same every time: Park & Miller (1988) minimal standard. */
export function noise(seed: number): () => number {
  let state = seed;
  return () => {
    state = (state * 48_271) % 2_147_483_647;
    return (2 * state) / 2_147_483_647 - 1;
  };
}

/** Least-squares amplitudes of cos and sin of phases 2π k/n, over whole periods of equally spaced samples. */
export function harmonicOf(samples: ArrayLike<number>, phaseOf: (k: number) => number): { cos: number; sin: number } {
  let cosine = 0;
  let sine = 0;
  for (let k = 0; k < samples.length; k++) {
    cosine += samples[k] * Math.cos(phaseOf(k));
    sine += samples[k] * Math.sin(phaseOf(k));
  }
  return { cos: (2 * cosine) / samples.length, sin: (2 * sine) / samples.length };
}
