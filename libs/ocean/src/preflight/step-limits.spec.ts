import { describe, expect, it } from 'vitest';
import { PRESETS } from '../presets/presets';
import type { Setup } from '../setup';
import { preflight } from './preflight';
import { applyRemedy } from './remedies';
import { scalesOf } from './scales';
import { proposeStepsPerDay } from './step-limits';
import { changed, number, row } from './testing';

describe('time step', () => {
  const at = (stepsPerDay: number, change: (setup: Setup) => void = () => undefined) =>
    preflight(
      changed((setup) => {
        setup.numerics.stepsPerDay = stepsPerDay;
        setup.friction.viscosityM2S = 0;
        change(setup);
      }),
    );
  it('passes to S = 0.75, asks for caution to 0.88, refuses beyond', () => {
    // One step a day is S = 0.6729 × 16.
    const S = (n: number) => (0.672_913_748 * 16) / n;
    expect([16, 12].map((n) => [row(at(n), 'step-gravity').verdict, S(n) > 0.75, S(n) > 0.88])).toEqual([
      ['pass', false, false],
      ['refuse', true, true],
    ]);
    const caution = at(16, ({ layer }) => (layer.restThicknessM = 300));
    expect(number(caution, 'S')).toBeCloseTo(0.824, 3);
    expect(row(caution, 'step-gravity').verdict).toBe('caution');
  });
  it('says what the step must be below, and writes the steps a day that cure it', () => {
    const refused = row(at(12), 'step-gravity');
    expect(refused).toMatchObject({
      unit: 's',
      value: 7200,
      pointers: expect.arrayContaining(['/numerics/stepsPerDay']),
    });
    expect(refused.reason).toMatch(/^7.200 s must be below 7.062 s/);
    expect(refused.remedy).toEqual({
      label: 'Use 16 a day',
      changes: [{ pointer: '/numerics/stepsPerDay', value: 16 }],
    });
  });
  it('lets rotation bind on a coarse grid of wide latitude range', () => {
    // numerics.md §5: "a trial blew up at F = 0.85 although S = 0.6".
    const coarse = at(8, ({ basin, numerics }) => {
      Object.assign(basin, { southDeg: -35, northDeg: 35 });
      Object.assign(numerics, { spacingLongitudeDeg: 1, spacingLatitudeDeg: 1 });
    });
    expect(row(coarse, 'step-gravity').verdict).toBe('pass');
    expect(number(coarse, 'F')).toBeCloseTo(0.96, 2);
    expect(row(coarse, 'step-rotation')).toMatchObject({ verdict: 'refuse', limit: 0.4 });
    expect(row(coarse, 'step-rotation').remedy!.changes).toEqual([{ pointer: '/numerics/stepsPerDay', value: 28 }]);
  });
  it('lowers the gravity limit to 0.80 where F > 0.5', () => {
    const strong = at(16, ({ basin, layer }) => {
      Object.assign(basin, { geometry: 'fplane', f0PerS: 0.55 / 5400, westernCoast: { kind: 'rectangular' } });
      layer.restThicknessM = 295;
    });
    expect(number(strong, 'F')).toBeCloseTo(0.55, 12);
    expect(number(strong, 'S')).toBeGreaterThan(0.8);
    expect(number(strong, 'S')).toBeLessThan(0.88);
    expect(row(strong, 'step-gravity').verdict).toBe('refuse');
  });
  it('joins viscosity and gravity: νS = 0.08 leaves S = 0.6222 of 0.88', () => {
    const joined = at(16, ({ friction, layer }) => {
      friction.viscosityM2S = (4000 * 0.08) / 0.055_902_83;
      layer.restThicknessM = 200 * (0.6222 / 0.672_913_75) ** 2;
    });
    expect(number(joined, 'combined')).toBeCloseTo(1, 3);
    const over = at(16, ({ friction }) => (friction.viscosityM2S = 20_000));
    expect(row(over, 'step-viscosity')).toMatchObject({ verdict: 'refuse', limit: 0.16 });
    expect(row(over, 'step-combined').verdict).toBe('refuse');
    expect(preflight(applyRemedy(changed((setup) => (setup.friction.viscosityM2S = 20_000)), row(over, 'step-combined').remedy!)).verdict).toBe('pass'); // prettier-ignore
  });
  it('offers other viscosity or wider cells when no allowed step would do', () => {
    const setup = changed(({ numerics, friction, basin }) => {
      Object.assign(basin, { eastDeg: 2, westernCoast: { kind: 'rectangular' }, islands: [] });
      numerics.spacingLongitudeDeg = numerics.spacingLatitudeDeg = 0.01;
      friction.viscosityM2S = 1e6;
    });
    expect(proposeStepsPerDay(setup)).toBeGreaterThan(2000);
    const { remedy } = row(preflight(setup), 'step-viscosity');
    expect(remedy!.label).toMatch(/m²\/s/);
    expect(row(preflight(applyRemedy(setup, remedy!)), 'step-viscosity').verdict).toBe('pass');
  });
  it('proposes the smallest multiple of 4 that does not exceed the default step and passes', () => {
    for (const { setup } of PRESETS) {
      const n = proposeStepsPerDay(setup);
      expect(n % 4).toBe(0);
      const { rates } = scalesOf(setup);
      const longest = Math.min(0.7 / rates.gravity, rates.coriolis > 0 ? 0.3 / rates.coriolis : Infinity);
      expect(86_400 / n).toBeLessThanOrEqual(longest * (1 + 1e-9));
      const stepRows = (stepsPerDay: number) =>
        preflight(changed(({ numerics }) => (numerics.stepsPerDay = stepsPerDay), setup)).checks.filter(({ id }) =>
          id.startsWith('step-'),
        );
      expect(stepRows(n).every(({ verdict }) => verdict === 'pass')).toBe(true);
      const tooFew = 86_400 / (n - 4) > longest || stepRows(n - 4).some(({ verdict }) => verdict !== 'pass');
      expect(tooFew).toBe(true);
    }
  });
});
