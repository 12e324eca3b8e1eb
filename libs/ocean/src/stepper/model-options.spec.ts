import { describe, expect, it } from 'vitest';
import { forcingFromFunctions } from '../forcing/forcing';
import { planeGrid } from '../grid/grid';
import { failureReport } from '../integration/failure';
import { createModel, setState, type Model } from './model';
import type { ModelOptions } from './model-options';
import { stepModel } from './stepper';

const grid = planeGrid({ nx: 6, ny: 5, dx: 5e4, dy: 5e4, f: () => 1e-5 });
const model = (change: Partial<ModelOptions> = {}): Model =>
  createModel({ grid, dt: 2000, reducedGravity: 0.03, restThickness: 100, equations: 'nonlinear', ...change });
const filled = (length: number, value: number) => new Float64Array(length).fill(value);

describe('what a model is made of', () => {
  it.each<[Partial<ModelOptions>, RegExp]>([
    [
      { entrainment: { onsetThickness: 0, timescale: 1e5, detrainment: 'none' } },
      /entrainment sets in must be .* in m; 0 arrived/,
    ],
    [
      { entrainment: { onsetThickness: 60, timescale: NaN, detrainment: 'none' } },
      /timescale of entrainment .* NaN arrived/,
    ],
    [{ minimumThickness: -1 }, /minimum thickness must be 0 or a positive .* -1 arrived/],
    [{ stressFloor: Infinity }, /stress floor .* Infinity arrived/],
    [
      { sponge: { u: filled(35, 0), v: filled(36, 0), cell: filled(29, 0) } },
      /Sponge rates at cells must be 5 × 6 numbers; 29 arrived/,
    ],
    [
      { sponge: { u: filled(35, 0).fill(-1e-6, 9, 10), v: filled(36, 0), cell: filled(30, 0) } },
      /Sponge rates at u points .* -0.000001 arrived in row 1, column 2/,
    ],
    [
      { viscosityMap: { cell: filled(30, 1), corner: filled(42, 1).fill(NaN, 41) } },
      /Viscosities at corners .* NaN arrived in row 5, column 6/,
    ],
    [
      { forcing: forcingFromFunctions(grid, [{ taux: (x) => (x > 1e5 ? Infinity : 0) }]) },
      /Forcing 1 has tauxField = Infinity at index 3/,
    ],
  ])('is refused by name when the equations cannot take it (%#)', (change, message) => {
    expect(() => model(change)).toThrow(message);
  });

  it('a start state that is not finite, or has no layer, is refused by place', () => {
    expect(() => setState(model(), { v: (i, j) => (i === 2 && j === 3 ? Infinity : 0) })).toThrow(/v = Infinity/);
    expect(() => setState(model(), { eta: (i) => (i === 4 ? -100 : 0) })).toThrow(/layer of 0 m at column 4, row 0/);
  });

  it('a wind whose factor is no number is named when the state has gone wrong', () => {
    const forcing = forcingFromFunctions(grid, [
      { taux: () => 0.1 },
      { taux: () => 0.1, factor: (step) => (step === 3 ? NaN : 1) },
    ]);
    const run = model({ forcing });
    setState(run, {});
    for (let n = 0; n < 4; n++) stepModel(run);
    const report = failureReport(run, 43.2, true, 1);
    expect(report.step).toBe(4);
    expect(report.cell?.variable).toBe('u');
    expect(report.message).toMatch(
      /u at .* is not finite after step 4 .*Part 2 of the wind has a factor of NaN in that step/,
    );
  });
});
