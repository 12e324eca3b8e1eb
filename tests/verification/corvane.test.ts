import { describe, expect, it } from 'vitest';
import { Integration } from '@halfdeep/ocean';
import { corvaneForCheck } from '../../libs/ocean/src/testing/setups';

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

  it('carries 5.37 Sv across the equator at the peak of the season, to 0.5 %', () => {
    expect(Math.abs(most / 5.37 - 1)).toBeLessThan(5e-3);
  });
  it('carries nothing over a repeating year', () => {
    const mean = pentads.reduce((sum, value) => sum + value, 0) / 73;
    expect(Math.abs(mean)).toBeLessThan(0.01);
  });
  it('has h − H between −9 and +20 m at the turn of the year', () => {
    const values = water(eta);
    expect(Math.round(values.reduce((low, value) => Math.min(low, value), 0))).toBe(-9);
    expect(Math.round(values.reduce((high, value) => Math.max(high, value), 0))).toBe(20);
  });
  it('repeats from year 3 to year 4 to 0.1 m (rms over all pentads and cells)', () => {
    const rms = Math.sqrt(squares / count);
    expect(Math.abs(rms - 0.1)).toBeLessThan(0.02);
  });
  it('closes its budgets', () => {
    expect(residual / work).toBeLessThan(1e-11);
    expect(worst).toBeLessThan(1e-9); // Gt, of thousands
  });
});
