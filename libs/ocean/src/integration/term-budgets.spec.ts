import { describe, expect, it } from 'vitest';
import { stepModel } from '../stepper/stepper';
import type { Model } from '../stepper/model';
import { LastStep } from '../terms/last-step';
import { createRowTerms, meridionalTerms, MOMENTUM_TERMS, zonalTerms } from '../terms/momentum-terms';
import { randomModel, type RandomModelOptions } from '../testing/random-model';
import { smallSetup } from '../testing/setups';
import { Integration } from './integration';
import { recordSteps } from './schedule';
import { TermBudgets } from './term-budgets';

const NONLINEAR = { equations: 'nonlinear' } as const;
const ENTRAINMENT = { onsetThickness: 200, timescale: 864_000 };
const CASES: [string, Omit<RandomModelOptions, 'seed'>][] = [
  ['closed, free slip', {}],
  ['closed, no slip', { slip: 'none' }],
  ['periodic, free slip', { periodic: true }],
  ['periodic, no slip, viscosity map', { periodic: true, slip: 'none', viscosityMap: true }],
  ['sponges', { sponge: true }],
  ['periodic band, sponges, viscosity map', { periodic: true, band: true, sponge: true, viscosityMap: true }],
  ['nonlinear, closed', { more: NONLINEAR }],
  ['nonlinear, periodic band, no slip', { more: NONLINEAR, periodic: true, band: true, slip: 'none' }],
  ['nonlinear, limiter and stress floor at work', { more: { ...NONLINEAR, minimumThickness: 188, stressFloor: 195 } }],
  ['nonlinear, entrainment', { more: { ...NONLINEAR, entrainment: { ...ENTRAINMENT, detrainment: 'none' } } }],
  [
    'nonlinear, periodic, entrainment given back, sponges, viscosity map',
    {
      more: { ...NONLINEAR, minimumThickness: 188, entrainment: { ...ENTRAINMENT, detrainment: 'uniform' } },
      periodic: true,
      sponge: true,
      viscosityMap: true,
    },
  ],
];

/** |residual| / the largest term, of all points of the last step. */
function worstPoint(model: Model): number {
  const last = new LastStep(model);
  last.update();
  const row = createRowTerms(model.grid.nx);
  let [worst, largest] = [0, 0];
  for (let j = 0; j <= model.grid.ny; j++)
    for (const terms of j < model.grid.ny ? [zonalTerms, meridionalTerms] : [meridionalTerms]) {
      terms(last, j, row);
      for (let i = 0; i <= model.grid.nx; i++) {
        const sum = MOMENTUM_TERMS.reduce((total, term) => total + row[term][i], 0);
        worst = Math.max(worst, Math.abs(row.tendency[i] - sum));
        largest = Math.max(largest, ...MOMENTUM_TERMS.map((term) => Math.abs(row[term][i])));
      }
    }
  return worst / largest;
}

/** Values of budgets by column name after `steps` steps. */
function budgetAfter(model: Model, steps: number): Map<string, number> {
  const budgets = new TermBudgets(model, { momentumBudget: true, vorticityBudget: true });
  for (let n = 0; n < steps; n++) {
    stepModel(model);
    budgets.add();
  }
  const values = budgets.take();
  expect(values).toHaveLength(budgets.columns.length);
  return new Map(budgets.columns.map(({ name }, k) => [name, values[k]]));
}

/** |residual| of a budget over its largest term. */
function closure(values: Map<string, number>, prefix: string): number {
  const terms = [...values].filter(([name]) => name.startsWith(prefix) && !name.endsWith('Residual'));
  const largest = Math.max(...terms.map(([, value]) => Math.abs(value)));
  expect(largest).toBeGreaterThan(0);
  return Math.abs(values.get(`${prefix}Residual`)!) / largest;
}

describe('the terms of the last step', () => {
  it.each(CASES)('sum to the tendency at every point: %s', (_name, options) => {
    for (const seed of [1, 2, 3]) {
      const model = randomModel({ seed, ...options });
      for (let n = 0; n < 4; n++) stepModel(model);
      expect(worstPoint(model)).toBeLessThan(1e-11);
    }
  });
});

describe('the budgets of momentum and vorticity', () => {
  it.each(CASES)('close to 1e-11 of their largest term: %s', (_name, options) => {
    for (const seed of [4, 5, 6]) {
      const values = budgetAfter(randomModel({ seed, ...options }), 40);
      expect(closure(values, 'momentum'), `momentum, seed ${seed}`).toBeLessThan(1e-11);
      expect(closure(values, 'vorticity'), `vorticity, seed ${seed}`).toBeLessThan(1e-11);
    }
  });
});

describe('a run that asks for both budgets', () => {
  const setup = smallSetup();
  setup.output = { ...setup.output, momentumBudget: true, vorticityBudget: true };
  const values = (run: Integration) => {
    const taken = run.takeBudget();
    return new Map(run.budgetColumns().map(({ name }, k) => [name, taken[k]]));
  };
  it('closes them over an output interval', () => {
    const run = Integration.start(setup);
    const { budget } = recordSteps(setup);
    run.advance(3 * budget);
    run.takeBudget();
    run.advance(budget);
    const taken = values(run);
    expect(taken.size).toBe(run.budgetColumns().length);
    expect(closure(taken, 'momentum')).toBeLessThan(1e-11);
    expect(closure(taken, 'vorticity')).toBeLessThan(1e-11);
    // The trades blow westward over the whole basin, and the patch not eastward: their force is theirs alone.
    expect(taken.get('momentumWind')).toBeLessThan(0);
  });
  it('has the same fingerprint as one that does not, and goes on from a checkpoint to the same bits', () => {
    const run = Integration.start(setup);
    run.advance(30);
    const restored = Integration.restore(setup, run.checkpoint());
    run.advance(18);
    restored.advance(18);
    expect(restored.takeBudget()).toEqual(run.takeBudget());
    const plain = Integration.start(smallSetup());
    plain.advance(48);
    expect(plain.fingerprint().sha256).toBe(run.fingerprint().sha256);
    expect(plain.budgetColumns().length).toBeLessThan(run.budgetColumns().length);
  });
});
