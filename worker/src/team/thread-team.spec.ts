import { describe, expect, it } from 'vitest';
import {
  createModel,
  createStepper,
  forcingFromFunctions,
  planeGrid,
  setState,
  steppedBy,
  type Model,
  type StepperOptions,
  type StepRecorder,
} from '@halfdeep/ocean';
import { WorkerThreadTeam } from './thread-team';

interface Case {
  equations: 'linear' | 'nonlinear';
  periodic: boolean;
  varies: boolean;
  ny: number;
}

/** A model with an island, slanting coasts, wind, damping and limited cells; large enough for three threads. */
function modelOf({ equations, periodic, varies, ny }: Case, options: StepperOptions): Model {
  const nx = 97;
  const grid = planeGrid({
    nx,
    ny,
    dx: 4e4,
    dy: 4e4,
    periodic,
    f: (y) => 2e-11 * (y - 1e6),
    isWater: (x, y) => (periodic || x > 0.2 * y) && !(x > 1.5e6 && x < 1.8e6 && y > 6e5 && y < 14e5),
  });
  const field = (rows: number, columns: number, size: number) =>
    Float64Array.from({ length: rows * columns }, (_, k) => size * (1 + Math.sin(k)));
  const model = createModel({
    grid,
    equations,
    dt: 3000,
    reducedGravity: 0.03,
    restThickness: 200,
    rayleigh: 1e-7,
    viscosity: 2000,
    damping: 1e-8,
    slip: 'none',
    minimumThickness: 194,
    entrainment: { onsetThickness: 198, timescale: 3e5, detrainment: 'none' },
    meridians: [nx >> 1],
    forcing: forcingFromFunctions(grid, [{ taux: (x, y) => 0.02 * Math.cos(1e-6 * (x + y)) }]),
    sponge: varies ? { u: field(ny, nx + 1, 1e-6), v: field(ny + 1, nx, 1e-6), cell: field(ny, nx, 1e-6) } : null,
    viscosityMap: varies ? { cell: field(ny, nx, 2000), corner: field(ny + 1, nx + 1, 2000) } : null,
    ...steppedBy(options, nx),
  });
  setState(model, {
    eta: (i, j) => 6 * Math.sin(0.5 * i) * Math.cos(0.3 * j),
    u: (i, j) => 0.05 * Math.sin(0.2 * i + j),
    v: (i, j) => 0.05 * Math.cos(0.3 * i - j),
  });
  return model;
}

/** Steps a model in calls of several lengths, with and without sums; every sum in order. */
function step(model: Model, options: StepperOptions, threads: number): number[] {
  const sums: number[] = [];
  const stepper = createStepper(model, options);
  const recorder: StepRecorder = {
    add: ({ terms, northward, eastward }) => {
      for (const row of [...Object.values(terms), northward, ...eastward]) sums.push(...row);
    },
  };
  expect(stepper.threads).toBe(threads);
  stepper.advance(1, recorder);
  stepper.advance(7);
  stepper.advance(80, recorder);
  stepper.dismiss();
  stepper.advance(3);
  return sums;
}

describe('a team of threads', () => {
  it.each([
    { equations: 'linear', periodic: false, varies: false, ny: 52 },
    { equations: 'linear', periodic: true, varies: true, ny: 55 },
    { equations: 'nonlinear', periodic: false, varies: false, ny: 52 },
    { equations: 'nonlinear', periodic: true, varies: true, ny: 55 },
    { equations: 'nonlinear', periodic: true, varies: false, ny: 61 },
  ] as const)('leaves the same bits as one thread and as the reference: %o', (drawn) => {
    const reference = modelOf(drawn, { kernel: 'reference' });
    const expected = step(reference, { kernel: 'reference' }, 1);
    for (const threads of [1, 2, 3]) {
      const options = { kernel: 'simd', team: new WorkerThreadTeam(threads) } as const;
      const model = modelOf(drawn, options);
      const sums = step(model, options, threads);
      const { ring } = model.layout;
      const differs = (a: ArrayLike<number>, b: ArrayLike<number>) => {
        for (let k = 0; k < b.length; k++) if (!Object.is(a[k], b[k])) return k;
        return -1;
      };
      expect(sums.length).toBe(expected.length);
      expect(differs(sums, expected), `sums, ${threads} threads`).toBe(-1);
      expect(
        differs(model.data.subarray(0, ring), reference.data.subarray(0, ring)),
        `levels, ${threads} threads`,
      ).toBe(-1);
    }
    expect(reference.data.subarray(0, reference.layout.ring).every(Number.isFinite)).toBe(true);
  });
  it('is left alone where a step is too short to share', () => {
    const grid = planeGrid({ nx: 20, ny: 20, dx: 4e4, dy: 4e4, f: () => 1e-5 });
    const options = { team: new WorkerThreadTeam(2) };
    const physics = { grid, dt: 1000, reducedGravity: 0.03, restThickness: 200 };
    const model = createModel({ ...physics, ...steppedBy(options, 20) });
    expect(createStepper(model, options)).toMatchObject({ kernel: 'simd', threads: 1 });
  });
  it('refuses a number of threads that is none', () => {
    expect(() => new WorkerThreadTeam(0)).toThrow('A team has a whole number of threads from 1 on; 0 arrived.');
  });
});
