import { describe, expect, it } from 'vitest';
import { windForcing } from '../forcing/forcing';
import { SECONDS_PER_DAY } from '../forcing/season';
import { buildGrid } from '../grid/build-grid';
import { createModel, setState, type Model } from '../stepper/model';
import { stepModel } from '../stepper/stepper';
import { LastStep } from '../terms/last-step';
import { randomModel, type RandomModelOptions } from '../testing/random-model';
import { corvaneForCheck } from '../testing/setups';
import { BALANCE_TERMS, equatorValidBalance, latitudeBalance, type BalanceTerms } from './latitude-balance';
import { meridianBalance } from './meridian-balance';

const NONLINEAR = { equations: 'nonlinear', minimumThickness: 188, stressFloor: 195 } as const;
const ENTRAINMENT = { onsetThickness: 200, timescale: 864_000, detrainment: 'uniform' } as const;
const CASES: [string, Omit<RandomModelOptions, 'seed'>][] = [
  ['closed', {}],
  ['closed, no slip, viscosity map', { slip: 'none', viscosityMap: true }],
  ['periodic band, sponges', { periodic: true, band: true, sponge: true }],
  ['nonlinear, closed, no slip', { slip: 'none', more: NONLINEAR }],
  [
    'nonlinear, periodic band, entrainment, sponges',
    { periodic: true, band: true, sponge: true, more: { ...NONLINEAR, entrainment: ENTRAINMENT } },
  ],
];

function lastOf(model: Model, steps: number): LastStep {
  for (let n = 0; n < steps; n++) stepModel(model);
  const last = new LastStep(model);
  last.update();
  return last;
}

/** |residual| over the largest of the terms and the left side. */
function closure({ residual, terms }: { residual: number; terms: BalanceTerms }, leftSide: number): number {
  return Math.abs(residual) / Math.max(Math.abs(leftSide), ...BALANCE_TERMS.map((term) => Math.abs(terms[term])));
}

function worst(last: LastStep): { row: number; equator: number; meridian: number; part: number } {
  const { nx, ny } = last.model.grid;
  const found = { row: 0, equator: 0, meridian: 0, part: 0 };
  for (let j = 0; j < ny; j++) {
    const balance = latitudeBalance(last, j);
    found.row = Math.max(found.row, closure(balance, balance.rotation));
    const part = latitudeBalance(last, j, { fromCell: 3, toCell: nx - 4 });
    found.part = Math.max(found.part, closure(part, part.rotation));
    if (j === 0) continue;
    const equator = equatorValidBalance(last, j);
    found.equator = Math.max(found.equator, closure(equator, equator.beta));
  }
  for (let i = 0; i < nx; i++) {
    const balance = meridianBalance(last, i);
    found.meridian = Math.max(found.meridian, closure(balance, balance.rotation));
  }
  return found;
}

describe('the balances of transport', () => {
  it.each(CASES)('close on every row, part of a row and meridian of random states: %s', (_name, options) => {
    for (const seed of [11, 12]) {
      const found = worst(lastOf(randomModel({ seed, ...options }), 4));
      for (const [which, closed] of Object.entries(found)) expect(closed, `${which}, seed ${seed}`).toBeLessThan(1e-11);
    }
  });
  it.each(['linear', 'nonlinear'] as const)('close on a year of the Corvane setup, coarse: %s', (equations) => {
    const setup = corvaneForCheck();
    setup.numerics = { equations, spacingLongitudeDeg: 1, spacingLatitudeDeg: 1, stepsPerDay: 8 };
    const grid = buildGrid(setup);
    const model = createModel({
      grid,
      equations,
      dt: SECONDS_PER_DAY / setup.numerics.stepsPerDay,
      reducedGravity: 0.03,
      restThickness: 200,
      rayleigh: 1e-7,
      viscosity: 2e4,
      forcing: windForcing(setup, grid),
      minimumThickness: equations === 'nonlinear' ? 20 : 0,
      entrainment: equations === 'nonlinear' ? ENTRAINMENT : null,
    });
    setState(model, {});
    const last = lastOf(model, 365 * 8);
    const found = worst(last);
    for (const [which, closed] of Object.entries(found)) expect(closed, which).toBeLessThan(1e-11);
    // Away from the equator the wind and the pressure carry the transport between them; round-off must not pass for them.
    const { terms, rotation } = latitudeBalance(last, grid.equatorRow! + 8);
    expect(Math.abs(terms.wind)).toBeGreaterThan(1e-3 * Math.abs(terms.pressure));
    expect(Math.abs(rotation)).toBeGreaterThan(0);
  });
  it('name what the limiter took', () => {
    const last = lastOf(randomModel({ seed: 11, slip: 'none', more: NONLINEAR }), 4);
    const rows = Array.from({ length: last.model.grid.ny }, (_, j) => latitudeBalance(last, j));
    expect(rows.some(({ terms }) => Math.abs(terms.limiter) > 1e-6 * Math.abs(terms.pressure))).toBe(true);
    expect(rows.every(({ terms }) => terms.stretching !== 0)).toBe(true);
  });
  it('are the transports that the step used, and the averaging remainder', () => {
    const last = lastOf(randomModel({ seed: 3 }), 3);
    const { grid } = last.model;
    const balance = latitudeBalance(last, 5);
    const V = [5, 6].map((j) => {
      let sum = 0;
      for (let i = 0; i < grid.nx; i++) sum += last.vt[last.at(j) + i] * 200 * grid.dxV[j];
      return sum;
    });
    expect(balance.south / V[0]).toBeCloseTo(1, 12);
    expect(balance.north / V[1]).toBeCloseTo(1, 12);
    const fc = 0.5 * (grid.f[5] + grid.f[6]);
    const atRow = fc * 0.5 * (V[0] + V[1]);
    expect(Math.abs(balance.rotation - balance.averaging - atRow)).toBeLessThan(1e-12 * Math.abs(atRow));
  });
  it('refuse rows, parts and columns that are not on the grid', () => {
    const last = lastOf(randomModel({ seed: 3 }), 1);
    expect(() => latitudeBalance(last, 16)).toThrow(/0 to 15; 16 arrived/);
    expect(() => latitudeBalance(last, 3, { fromCell: 5, toCell: 5 })).toThrow(/5 to 5 arrived/);
    expect(() => equatorValidBalance(last, 0)).toThrow(/1 to 15; 0 arrived/);
    expect(() => meridianBalance(last, 21)).toThrow(/0 to 20; 21 arrived/);
  });
});
