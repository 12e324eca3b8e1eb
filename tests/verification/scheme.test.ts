import { describe, expect, it } from 'vitest';
import {
  energyOf,
  etaAt,
  forcingFromFunctions,
  isWet,
  planeGrid,
  setState,
  stabilityNumbers,
  stepModel,
  totalsOf,
  valueAt,
  type Grid,
} from '@halfdeep/ocean';
import { advance, beta, c, commonModel, commonStep, noise, order, relativeL2 } from './common';
import { convergencePlate } from './plates';
import { proveCase } from './record';

// Case s. Order of the scheme in time on a fixed grid; structure and coefficients after Shchepetkin & McWilliams (2005),
// Ocean Modelling 9, 347–404 (from memory), orders re-derived for this project: 2.27, 2.08, 2.03.
describe('order in time on a fixed grid', () => {
  const grid = planeGrid({ nx: 24, ny: 24, dx: 1e5, dy: 1e5, y0: -1.2e6, f: (y) => beta * y, beta });
  const duration = 10 * 86_400;
  const solve = (steps: number, equations: 'linear' | 'nonlinear'): number[] => {
    const dt = duration / steps;
    const forcing = forcingFromFunctions(grid, [
      {
        taux: (x, y) => 0.05 * Math.sin((Math.PI * x) / 2.4e6) * Math.cos((Math.PI * y) / 1.2e6),
        factor: (step) => Math.sin((2 * Math.PI * (step + 0.5) * dt) / (5 * 86_400)),
      },
    ]);
    const model = commonModel({ grid, dt, equations, rayleigh: 1e-6, viscosity: 5000, damping: 1e-7, forcing });
    setState(model, {
      eta: (i, j) => 10 * Math.exp(-(((grid.xCentre[i] - 8e5) / 4e5) ** 2) - (grid.yCentre[j] / 4e5) ** 2),
    });
    advance(model, steps);
    return Array.from({ length: 24 * 24 }, (_, k) => etaAt(model, k % 24, Math.floor(k / 24)));
  };
  for (const equations of ['linear', 'nonlinear'] as const)
    it(`is two: ${equations}`, (context) => {
      const base = Math.ceil(duration / commonStep(grid));
      const reference = solve(32 * base, equations);
      const errors = [1, 2, 4, 8].map((factor) => relativeL2(solve(factor * base, equations), reference));
      const orders = [0, 1, 2].map((k) => order(errors[k], errors[k + 1]));
      for (const observed of orders) expect(observed).toBeGreaterThan(1.9);
      // The reference itself costs the last figure a little; the approach to 2 is from above.
      proveCase(context, 's', {
        id: equations,
        quantity: `${equations}: η after ten days against a step four times as short, L2`,
        expected: 0,
        obtained: errors[3],
        kind: 'L2',
        tolerance: 1e-3,
        order: orders[2],
        orderRange: [1.9, 2.2],
        resolution: '24 × 24 cells; step halved three times',
        plate: convergencePlate(
          `Error of η against the step, on a fixed grid, ${equations} equations.`,
          'step over the longest one',
          [1, 1 / 2, 1 / 4, 1 / 8],
          [{ name: 'η, L2', values: errors }],
        ),
      });
    });
});

// Case t. Stability limits of numerics.md §5: noise for 4000 steps, stable below and blown up above.
describe('stability limits', () => {
  const n = 40;
  const growth = (options: { S?: number; F?: number; nuS?: number }): number => {
    const dx = 5e4;
    const per = Math.sqrt(2) / dx;
    const dt = (options.S ?? 0.1) / (c * per);
    const f = (options.F ?? 0) / dt;
    const grid = planeGrid({ nx: n, ny: n, dx, dy: dx, periodic: true, f: () => f });
    const viscosity = (options.nuS ?? 0) / (dt * per * per);
    const model = commonModel({ grid, dt, viscosity });
    const random = noise(7);
    setState(model, { eta: random, u: () => 0.01 * random(), v: () => 0.01 * random() });
    const numbers = stabilityNumbers(grid, c, dt, viscosity);
    expect(numbers.gravity).toBeCloseTo(options.S ?? 0.1, 9);
    expect(numbers.coriolis).toBeCloseTo(options.F ?? 0, 9);
    expect(numbers.viscous).toBeCloseTo(options.nuS ?? 0, 9);
    const energy = () => {
      const { kinetic, potential } = energyOf(model);
      return kinetic + potential;
    };
    const before = energy();
    for (let step = 0; step < 4000; step++) {
      advance(model);
      if (step % 200 === 199 && !(energy() < 1e12 * before)) return Infinity;
    }
    return energy() / before;
  };
  for (const [name, below, above] of [
    ['gravity waves', { S: 0.885 }, { S: 0.9 }],
    ['rotation', { F: 0.75 }, { F: 0.8 }],
    ['viscosity', { nuS: 0.155 }, { nuS: 0.165 }],
    ['gravity waves with viscosity', { S: 0.62, nuS: 0.08 }, { S: 0.65, nuS: 0.08 }],
    ['gravity waves with rotation', { S: 0.88, F: 0.6 }, null],
  ] as const)
    it(name, (context) => {
      const numbers = (options: object) =>
        Object.entries(options)
          .map(([key, value]) => `${key === 'nuS' ? 'νS' : key} = ${String(value)}`)
          .join(', ');
      proveCase(context, 't', {
        id: `${name}, below`,
        quantity: `${name}, ${numbers(below)}: energy after 4000 steps over before, at most`,
        expected: 1,
        obtained: growth(below),
        kind: 'atMost',
        resolution: '40 × 40 cells of noise',
      });
      if (!above) return;
      // What blows up beyond 1e12 counts as 1e12.
      proveCase(context, 't', {
        id: `${name}, above`,
        quantity: `${name}, ${numbers(above)}: energy after 4000 steps over before, at least`,
        expected: 100,
        obtained: Math.min(1e12, growth(above)),
        kind: 'atLeast',
        resolution: '40 × 40 cells of noise',
      });
    });
});

// Case u. Semi-discrete conservation with random states and random land (Sadourny 1975, J. Atmos. Sci. 32, 680–689, for
// the energy form; identities derived for this project), on a plane and on a latitude band.
describe('conservation with any coast', () => {
  const randomGrid = (seed: number, periodic: boolean, band: boolean): Grid => {
    const random = noise(seed);
    const grid = planeGrid({
      nx: 17,
      ny: 13,
      dx: 8e4,
      dy: 6e4,
      y0: -4e5,
      periodic,
      f: (y) => beta * y,
      beta,
      isWater: () => random() > -0.5,
    });
    if (band) {
      grid.dxC.forEach((_dx, j) => (grid.dxC[j] = 8e4 * Math.cos(0.09 * (j + 0.5 - 6.5))));
      grid.dxV.forEach((_dx, j) => (grid.dxV[j] = 8e4 * Math.cos(0.09 * (j - 6.5))));
      grid.f.forEach((_f, j) => (grid.f[j] = 1e-4 * Math.sin(0.09 * (j - 6.5))));
    }
    return grid;
  };
  const cases = [1, 2, 3, 4, 5].flatMap((seed) =>
    [false, true].flatMap((periodic) => [false, true].map((band) => ({ seed, periodic, band }))),
  );
  const misses = (seed: number, periodic: boolean, band: boolean): { energy: number; mass: number } => {
    const grid = randomGrid(seed, periodic, band);
    // In a step this short nothing changes by more than a rounding, so that the step's work is the instant's rate.
    const model = commonModel({ grid, dt: 1e-12 });
    const random = noise(seed + 100);
    setState(model, { eta: () => 10 * random(), u: random, v: random });
    stepModel(model, true);
    const work = totalsOf(grid, model.sums);
    // ∂E/∂t = H Σ A u·(Coriolis − g′∇η) − g′ H Σ A η D: the two sums are equal, with the Coriolis work zero in between.
    const potential = model.reducedGravity * work.potential;
    let size = 0;
    let flux = 0;
    let mass = 0;
    for (let j = 0; j < grid.ny; j++)
      for (let i = 0; i < grid.nx; i++) {
        const [west, east] = [i, i + 1].map((face) => valueAt(model, 'u', face, j) * grid.dy);
        const south = valueAt(model, 'v', i, j) * grid.dxV[j];
        const north = valueAt(model, 'v', i, j + 1) * grid.dxV[j + 1];
        const outflow = east - west + north - south;
        size += Math.abs(model.reducedGravity * valueAt(model, 'h', i, j) * outflow);
        flux += Math.abs(outflow);
        mass += outflow;
        if (!isWet(grid, i, j)) expect(Math.abs(outflow) + Math.abs(valueAt(model, 'h', i, j))).toBe(0);
      }
    expect(flux).toBeGreaterThan(0);
    return { energy: Math.abs(work.kinetic - potential) / size, mass: Math.abs(mass) / flux };
  };
  for (const [where, band] of [
    ['a plane', false],
    ['a latitude band', true],
  ] as const)
    it(`mass and energy on ${where}, ten random coasts, closed and periodic`, (context) => {
      let [energy, mass] = [0, 0];
      for (const one of cases.filter((entry) => entry.band === band)) {
        const found = misses(one.seed, one.periodic, one.band);
        [energy, mass] = [Math.max(energy, found.energy), Math.max(mass, found.mass)];
      }
      for (const [id, obtained] of Object.entries({ energy, mass }))
        proveCase(context, 'u', {
          id: `linear ${id} on ${where}`,
          quantity: `linear: source of ${id} on ${where} over the sum of its parts’ sizes, largest of ten`,
          expected: 0,
          obtained,
          kind: 'absolute',
          tolerance: 1e-14,
          resolution: '17 × 13 cells, random land',
        });
    });
});
