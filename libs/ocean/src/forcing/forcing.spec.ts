import { describe, expect, it } from 'vitest';
import { buildGrid } from '../grid/build-grid';
import type { Setup, WindPattern } from '../setup';
import { smallSetup } from '../testing/setups';
import { windForcing } from './forcing';
import { evaluatePattern } from './pattern';
import { ramp, seasonFactor, stressAt } from './season';

const RADIUS = 6.371e6;
const setup = smallSetup();
const grid = buildGrid(setup);

describe('patterns', () => {
  const at = (pattern: WindPattern, lon: number, lat: number) => evaluatePattern(pattern, lon, lat, RADIUS);
  it('uniform, belt and patch', () => {
    expect(at({ kind: 'uniform', eastwardNM2: 0.1, northwardNM2: -0.2 }, 3, 4)).toEqual({ taux: 0.1, tauy: -0.2 });
    const belt = { kind: 'zonalBelt', direction: 'eastward', amplitudeNM2: 0.1, latitudeDeg: 12, widthDeg: 6 } as const;
    expect(at(belt, 0, 12).taux).toBe(0.1);
    expect(at(belt, 0, 18).taux).toBeCloseTo(0.1 * Math.exp(-0.5), 15);
    const patch = {
      kind: 'gaussianPatch',
      direction: 'northward',
      amplitudeNM2: 0.1,
      longitudeDeg: 5,
      latitudeDeg: 1,
      widthLongitudeDeg: 2,
      widthLatitudeDeg: 4,
    } as const;
    expect(at(patch, 7, 5)).toEqual({ taux: 0, tauy: expect.closeTo(0.1 * Math.exp(-1), 15) });
  });
  it('the shear is a y within the full latitude, tapered by cos² and zero beyond', () => {
    const shear = {
      kind: 'linearShear',
      stressNM2: 0.03,
      overDistanceKm: 1500,
      fullWithinDeg: 10,
      zeroBeyondDeg: 15,
    } as const;
    const linear = (lat: number) => (0.03 / 1.5e6) * RADIUS * ((lat * Math.PI) / 180);
    expect(at(shear, 0, 0).taux).toBe(0);
    expect(at(shear, 0, -8).taux).toBeCloseTo(linear(-8), 15);
    expect(at(shear, 0, 12.5).taux).toBeCloseTo(linear(12.5) / 2, 15);
    expect(at(shear, 0, 15).taux).toBe(0);
    expect(at(shear, 0, -17).taux).toBe(-0);
  });
});

describe('season', () => {
  const season = {
    mean: 0.5,
    switchOnDays: 40,
    annual: { amplitude: 1, peakDay: 196 },
    semiannual: { amplitude: 0.25, peakDay: 20 },
  };
  it('peaks on its day, and the strength acts on the harmonics alone', () => {
    const at = (day: number, strength = 1) => seasonFactor(season, day, strength);
    const semiannual = (day: number) => 0.25 * Math.cos((4 * Math.PI * (day - 20)) / 365);
    expect(at(365 + 196)).toBeCloseTo(0.5 + 1 + semiannual(196), 12);
    expect(at(561, 2) - at(561, 1)).toBeCloseTo(1 + semiannual(196), 12);
    expect(at(561, 0)).toBe(0.5);
    expect(at(400)).toBeCloseTo(at(400 + 365), 12);
  });
  it('rises by sin² from day 0', () => {
    expect([ramp(-1, 40), ramp(0, 40), ramp(20, 40), ramp(40, 40), ramp(99, 40)]).toEqual([
      0,
      0,
      expect.closeTo(0.5, 15),
      1,
      1,
    ]);
    expect([ramp(0, 0), ramp(5, 0)]).toEqual([1, 1]);
  });
});

describe('forcing of a setup', () => {
  /** Stress of the forcing at a u and a v point, half-way through a step. */
  const stressOf = (of: Setup, step: number, i: number, j: number) => {
    const forcing = windForcing(of, grid);
    const factors = new Float64Array(forcing.bases.length);
    forcing.factors(step, factors);
    return {
      taux: forcing.bases.reduce(
        (sum, basis, b) =>
          sum + factors[b] * ((basis.tauxRow?.[j] ?? 0) + (basis.tauxField?.[j * (grid.nx + 1) + i] ?? 0)),
        0,
      ),
      tauy: forcing.bases.reduce(
        (sum, basis, b) => sum + factors[b] * ((basis.tauyRow?.[j] ?? 0) + (basis.tauyField?.[j * grid.nx + i] ?? 0)),
        0,
      ),
    };
  };
  // A strength of its own, so that a factor on the wrong part of a season shows.
  const strong = smallSetup({ wind: { ...setup.wind, seasonalStrength: 1.7 } });
  it('is the wind that the diagrams show, at every point and half-step', () => {
    for (const step of [0, 7, 60, 1000, 365 * 12 + 3]) {
      const day = (step + 0.5) / 12;
      for (const [i, j] of [
        [0, 0],
        [13, 18],
        [40, 31],
      ] as const) {
        const found = stressOf(strong, step, i, j);
        if (j < grid.ny)
          expect(found.taux).toBeCloseTo(stressAt(strong, grid.lonFace[i], grid.latCentre[j], day).taux, 12);
        if (i < grid.nx)
          expect(found.tauy).toBeCloseTo(stressAt(strong, grid.lonCentre[i], grid.latFace[j], day).tauy, 12);
      }
    }
  });
  it.each([
    ['north', true],
    ['east', false],
  ] as const)('falls to nothing inside a sponge at the %s edge, and stays as it was outside', (edge, byRows) => {
    const sponge = { edge, widthDeg: 4, peakRatePerS: null, tapersWind: true };
    const tapered: Setup = { ...strong, basin: { ...strong.basin, sponges: [sponge] } };
    expect(windForcing(tapered, grid).bases[0].tauxRow !== null).toBe(byRows);
    for (const [i, j] of [
      [13, 18], // outside
      [37, 28],
      [40, 31],
    ] as const) {
      const found = stressOf(tapered, 60, i, j);
      const day = 60.5 / 12;
      expect(found.taux).toBeCloseTo(stressAt(tapered, grid.lonFace[i], grid.latCentre[j], day).taux, 12);
      const before = stressOf(strong, 60, i, j);
      const s = Math.max(0, edge === 'north' ? (grid.latCentre[j] - 4) / 4 : (grid.lonFace[i] - 16) / 4);
      expect(found.taux).toBeCloseTo(before.taux * Math.cos((Math.PI / 2) * s) ** 2, 15);
      if (s === 0) expect(found).toEqual(before);
    }
    const kept = { ...strong, basin: { ...strong.basin, sponges: [{ ...sponge, tapersWind: false }] } };
    expect(windForcing(kept, grid).bases).toEqual(windForcing(strong, grid).bases);
  });
  it('repeats from year to year to the last bit', () => {
    const steady = structuredClone(setup);
    steady.wind.components[0].season.switchOnDays = 0;
    for (const step of [0, 17, 4000])
      expect(stressOf(steady, step + 365 * 12 * 3, 13, 18)).toEqual(stressOf(steady, step, 13, 18));
  });
  it('groups components by distinct time function', () => {
    const many = structuredClone(setup);
    for (let k = 0; k < 10; k++) many.wind.components.push(structuredClone(setup.wind.components[k % 2]));
    // Ramp of 10 d, steady, annual of day 196, semiannual of day 20.
    expect(windForcing(setup, grid).bases).toHaveLength(4);
    expect(windForcing(many, grid).bases).toHaveLength(4);
    many.wind.components[5].season.annual.peakDay = 100;
    expect(windForcing(many, grid).bases).toHaveLength(5);
  });
  it('keeps what does not depend on longitude by rows', () => {
    const [ramped, ...others] = windForcing(setup, grid).bases;
    expect([ramped.tauxRow?.length, ramped.tauyRow, ramped.tauxField]).toEqual([grid.ny, null, null]);
    expect(others.every(({ tauyField, tauxRow }) => tauyField !== null && tauxRow === null)).toBe(true);
  });
  it('refuses a component whose stress is not finite, by name', () => {
    const bad = structuredClone(setup);
    (bad.wind.components[0].pattern as { widthDeg: number }).widthDeg = NaN;
    expect(() => windForcing(bad, grid)).toThrow(/Wind component 1 \(“trades”\) gives a stress of NaN/);
    const endless = structuredClone(setup);
    endless.wind.components[1].season.annual.amplitude = Infinity;
    expect(() => windForcing(endless, grid)).toThrow(/Wind component 2 \(“patch”\) gives a stress of Infinity/);
  });
});
