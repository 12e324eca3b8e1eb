import { describe, expect, it } from 'vitest';
import {
  createModel,
  createStepper,
  forcingFromFunctions,
  planeGrid,
  setState,
  steppedBy,
  type ModelOptions,
  type StepperOptions,
} from '@halfdeep/ocean';
import { beta, g, H, noise, rho0 } from './common';
import { proveCase } from './record';

// The readable stepper and the compiled one, to the last bit: random land, states and wind.
const STEPS = 200;

function stateAfter(options: Partial<ModelOptions>, periodic: boolean, stepping: StepperOptions): Float64Array {
  const random = noise(21);
  const grid = planeGrid({
    nx: 61,
    ny: 44,
    dx: 5e4,
    dy: 4e4,
    y0: -8.8e5,
    periodic,
    f: (y) => beta * y,
    beta,
    isWater: () => random() > -0.7,
  });
  const forcing = forcingFromFunctions(grid, [
    {
      taux: (x, y) => 0.05 * Math.sin(x / 4e5) * Math.cos(y / 3e5),
      tauy: (x) => 0.02 * Math.cos(x / 5e5),
      factor: (step) => Math.cos(step / 40),
    },
  ]);
  const model = createModel({
    ...steppedBy(stepping, grid.nx),
    reducedGravity: g,
    restThickness: H,
    density: rho0,
    grid,
    dt: 4000,
    rayleigh: 1e-7,
    viscosity: 2000,
    damping: 1e-8,
    forcing,
    ...options,
  });
  setState(model, { eta: () => 10 * random(), u: () => 0.1 * random(), v: () => 0.1 * random() });
  const stepper = createStepper(model, stepping);
  expect(stepper.kernel).toBe(stepping.kernel);
  stepper.advance(STEPS);
  const { layout, data } = model;
  return data.slice(layout.levels[0], layout.levels[0] + layout.levelLength);
}

describe('the two kernels', () => {
  for (const [name, options, periodic] of [
    ['linear, closed, free slip', {}, false],
    ['linear, periodic, no slip', { slip: 'none' }, true],
    ['nonlinear, closed, free slip', { equations: 'nonlinear' }, false],
    [
      'nonlinear, periodic, no slip, limiter, entrainment given back, stress floor',
      {
        equations: 'nonlinear',
        slip: 'none',
        minimumThickness: 148,
        entrainment: { onsetThickness: 155, timescale: 86_400, detrainment: 'uniform' },
        stressFloor: 50,
      },
      true,
    ],
  ] as const)
    it(name, (context) => {
      const reference = stateAfter(options, periodic, { kernel: 'reference' });
      const compiled = stateAfter(options, periodic, { kernel: 'simd' });
      expect(reference.some((value) => value !== 0)).toBe(true);
      let different = 0;
      reference.forEach((value, k) => (different += Object.is(value, compiled[k]) ? 0 : 1));
      proveCase(context, 'w', {
        id: name,
        quantity: `numbers of the state that differ after ${STEPS} steps; ${name}`,
        expected: 0,
        obtained: different,
        kind: 'absolute',
        tolerance: 0,
        resolution: '61 × 44 cells, random land',
      });
    });
});
