import { describe, expect, it } from 'vitest';
import { randomModel, type RandomOptions } from '../stepper/nonlinear/testing';
import { stepModel } from '../stepper/stepper';
import { energyOf, massAnomaly, volumeNorthOf } from './energy';
import { SOURCES, stepBudget, volumeRates, WORKS } from './step-budget';

const thin: RandomOptions = { thickness: 60, departure: 50, minimumThickness: 20, speed: 1, dt: 1000 };
const entrainment = { onsetThickness: 60, timescale: 2e5, detrainment: 'none' } as const;
const friction = { rayleigh: 1e-6, viscosity: 2000, damping: 1e-6 };
const CASES: [string, RandomOptions][] = [
  ['linear', { equations: 'linear', ...friction, band: true }],
  ['linear, sponges, a viscosity that varies', { equations: 'linear', varies: true, periodic: true, slip: 'none' }],
  ['wind alone', {}],
  ['drag, viscosity, damping', { ...friction, slip: 'none' }],
  ['periodic band', { ...friction, periodic: true, band: true }],
  ['sponges and a viscosity that varies', { varies: true, band: true, slip: 'none' }],
  ['limiter and clipping', { ...thin, periodic: true }],
  ['entrainment', { ...thin, entrainment, stressFloor: 40, ...friction, band: true }],
  ['entrainment given back', { ...thin, entrainment: { ...entrainment, detrainment: 'uniform' }, periodic: true }],
  [
    'everything',
    {
      ...thin,
      ...friction,
      entrainment: { ...entrainment, detrainment: 'uniform' },
      varies: true,
      band: true,
      periodic: true,
      slip: 'none',
      stressFloor: 30,
    },
  ],
];

// Identities derived for this project (numerics.md §9; nonlinear-sums.ts): every term is summed by itself, with random
// states, land and coefficients, and compared with the change of what the fields hold.
describe('the budget of one step', () => {
  it.each(CASES)('has terms that sum to the change of energy and of mass: %s', (_name, options) => {
    for (const seed of [1, 2, 3, 4, 5]) {
      const model = randomModel(seed, options);
      for (let n = 0; n < 3; n++) {
        const before = energyOf(model);
        const massBefore = massAnomaly(model);
        stepModel(model, true);
        const after = energyOf(model);
        const budget = stepBudget(model, model.sums);
        const works = WORKS.map((work) => budget[work]);
        const change = after.kinetic - before.kinetic + (after.potential - before.potential);
        const sum = works.reduce((total, work) => total + work, 0);
        const largest = Math.max(...works.map(Math.abs));
        expect(largest).toBeGreaterThan(0);
        expect(Math.abs(change - sum) / largest, `energy, seed ${seed}, step ${n}`).toBeLessThan(1e-11);
        const added = SOURCES.reduce((total, source) => total + budget[source], 0);
        const massChange = massAnomaly(model) - massBefore;
        // Mass moves by fluxes that cancel: their size is what round-off is measured by.
        const size = model.density * model.grid.nx * model.grid.ny * 8e4 * 6e4;
        expect(Math.abs(massChange - added) / size, `mass, seed ${seed}, step ${n}`).toBeLessThan(1e-12);
      }
    }
  });

  it('names work only where there is something that does it', () => {
    const bare = randomModel(1, {});
    stepModel(bare, true);
    const budget = stepBudget(bare, bare.sums);
    for (const term of ['rayleigh', 'viscous', 'damping', 'sponge', 'entrainment', 'detrainment'] as const)
      expect(Math.abs(budget[term]), term).toBe(0);
    const full = randomModel(1, CASES[CASES.length - 1][1]);
    stepModel(full, true);
    const whole = stepBudget(full, full.sums);
    for (const term of [...WORKS, ...SOURCES]) expect(Math.abs(whole[term]), term).toBeGreaterThan(0);
    expect(whole.limitedCells).toBeGreaterThan(0);
    expect(whole.clippedCells).toBeGreaterThan(0);
    // What is given back is what was taken up in this very step.
    expect(Math.abs(whole.massDetrainment / whole.massEntrainment + 1)).toBeLessThan(1e-14);
  });

  it.each(CASES)('carries across every row what the volume north of it gains: %s', (_name, options) => {
    const model = randomModel(7, options);
    const { ny, dxV } = model.grid;
    const before = Array.from({ length: ny + 1 }, (_, j) => volumeNorthOf(model, j));
    stepModel(model, true);
    const H = model.equations === 'linear' ? model.restThickness : 1;
    let worst = 0;
    let largest = 0;
    for (let j = 0; j <= ny; j++) {
      const flux = model.sums.northward[j] * dxV[j] * H;
      let added = 0;
      for (let k = j; k < ny; k++) {
        const rates = volumeRates(model, model.sums, k);
        added += rates.damped + rates.entrained;
      }
      const change = (volumeNorthOf(model, j) - before[j]) / model.dt;
      worst = Math.max(worst, Math.abs(change - flux - added));
      largest = Math.max(largest, Math.abs(flux));
    }
    expect(largest).toBeGreaterThan(0);
    expect(worst / largest).toBeLessThan(1e-11);
  });
});

// Case u of verification.md in nonlinear mode: with a step too short to change anything the work of the scheme is the rate of the
// space-discrete equations, which conserve energy with any coast (Sadourny 1975).
it.each([1, 2, 3, 4, 5, 6])('the space-discrete nonlinear equations conserve energy, seed %i', (seed) => {
  for (const band of [false, true]) {
    const model = randomModel(seed, { dt: 1e-12, band, periodic: seed % 2 === 0 });
    // Three equal levels, so that n + ½ is n.
    const level = model.layout.levels;
    for (const role of [1, 2, 3])
      model.data.copyWithin(
        level[(model.phase + role) & 3],
        level[model.phase],
        level[model.phase] + model.layout.levelLength,
      );
    const { grid } = model;
    let size = 0;
    stepModel(model, true);
    const { numerical } = stepBudget(model, model.sums);
    for (let j = 0; j < grid.ny; j++)
      size += grid.dxC[j] * grid.dy * Math.abs(model.sums.terms['bernoulliOutflow'][j]) * model.density * model.dt;
    expect(Math.abs(numerical) / size).toBeLessThan(1e-14);
  }
});
