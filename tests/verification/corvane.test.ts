import { describe, expect, it } from 'vitest';
import { Integration } from '@halfdeep/ocean';
import { corvaneForCheck } from '../../libs/ocean/src/testing/setups';
import { profilePlate } from './plates';
import { proveCase } from './record';

// The Corvane setup (numerics.md §12) against what was seen with an independent code of the same equations: net seasonal
// transport across the equator 5.37 Sv, h − H between −9 and +20 m, years repeating to 0.1 m (rms) in year 4.
describe('the Corvane setup', () => {
  const run = Integration.start({ ...corvaneForCheck(), length: { days: 4 * 365 } });
  const year = 365 * 16;
  run.advance(2 * year);
  const third = Array.from({ length: 73 }, () => {
    run.advance(80);
    return run.frame().eta;
  });
  let [squares, count] = [0, 0];
  // Year 4, in the five-day means of its section.
  run.takeSections();
  run.takeBudget();
  let [most, worst] = [0, 0];
  let [work, residual] = [0, 0];
  const pentads: number[] = [];
  for (let k = 0; k < 73; k++) {
    run.advance(80);
    run.frame().eta.forEach((eta, cell) => {
      if (Number.isNaN(eta)) return;
      squares += (eta - third[k][cell]) ** 2;
      count += 1;
    });
    const [mean, now] = run.takeSections();
    pentads.push(mean);
    most = Math.max(most, Math.abs(now));
    const budget = run.takeBudget();
    const at = (name: string) => budget[run.budgetColumns().findIndex((column) => column.name === name)];
    work += Math.abs(at('windWork'));
    residual = Math.max(residual, Math.abs(at('energyResidual')));
    worst = Math.max(worst, Math.abs(at('massResidual')));
  }
  const { eta } = run.frame();
  const water = (values: Float32Array) => values.filter((value) => !Number.isNaN(value));

  const resolution = '240 × 140 cells, four years';
  it('carries 5.37 Sv across the equator at the peak of the season, to 0.5 %', (context) => {
    proveCase(context, 'x', {
      id: 'seasonal-transport',
      quantity: 'largest net transport across the equator in year 4, Sv',
      expected: 5.37,
      obtained: most,
      tolerance: 5e-3,
      resolution,
      plate: profilePlate(
        'Transport across the equator in year 4, means of five days.',
        ['day of the year', 'transport, Sv'],
        [{ name: 'transport', role: 'found', x: pentads.map((_value, k) => 5 * k + 2.5), y: pentads }],
      ),
    });
  });
  it('carries nothing over a repeating year', (context) => {
    const mean = pentads.reduce((sum, value) => sum + value, 0) / 73;
    proveCase(context, 'x', {
      id: 'annual-transport',
      quantity: 'mean transport across the equator over year 4, Sv',
      expected: 0,
      obtained: mean,
      kind: 'absolute',
      tolerance: 0.01,
      resolution,
    });
  });
  it('has h − H between −9 and +20 m at the turn of the year', (context) => {
    const values = water(eta);
    for (const [id, expected, obtained] of [
      ['least', -9, values.reduce((low, value) => Math.min(low, value), 0)],
      ['largest', 20, values.reduce((high, value) => Math.max(high, value), 0)],
    ] as const)
      proveCase(context, 'x', {
        id: `${id}-eta`,
        quantity: `${id} h − H at the end of year 4, m`,
        expected,
        obtained,
        kind: 'absolute',
        tolerance: 0.5,
        resolution,
      });
  });
  it('repeats from year 3 to year 4 to 0.1 m (rms over all pentads and cells)', (context) => {
    proveCase(context, 'x', {
      id: 'repeats',
      quantity: 'rms of h between years 3 and 4, m',
      expected: 0.1,
      obtained: Math.sqrt(squares / count),
      kind: 'absolute',
      tolerance: 0.02,
      resolution,
    });
  });
  it('closes its budgets', (context) => {
    proveCase(context, 'x', {
      id: 'energy',
      quantity: 'energy residual over the wind’s work in year 4',
      expected: 0,
      obtained: residual / work,
      kind: 'absolute',
      tolerance: 1e-11,
      resolution,
    });
    expect(worst).toBeLessThan(1e-9); // Gt, of thousands
  });
});
