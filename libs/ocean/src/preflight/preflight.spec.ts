import { describe, expect, it } from 'vitest';
import { buildGrid } from '../grid/build-grid';
import { corvaneSetup } from '../presets/corvane';
import { PRESETS } from '../presets/presets';
import { preflight } from './preflight';
import { scalesOf } from './scales';
import { proposeStepsPerDay } from './step-limits';
import { changed, number, row } from './testing';

describe('the Corvane setup', () => {
  // numerics.md §12, "Its numbers".
  const result = preflight(corvaneSetup(), { quotaBytes: 20e9, freeDiskBytes: 20e9 });
  it('passes every row', () => {
    expect(result.verdict).toBe('pass');
    expect(result.checks.filter((check) => check.verdict !== 'pass')).toEqual([]);
    expect(result.checks.every((check) => check.remedy === null)).toBe(true);
    expect(result.notes).toEqual([]);
    expect(result.grid).toMatchObject({ nx: 240, ny: 140, dtS: 5400 });
  });
  it.each([
    ['S', 0.673, 3],
    ['F', 0.2405, 4], // printed as 0.241
    ['nuS', 0.0559, 4],
    ['combined', 0.934, 3],
    ['waveSpeed', 2.449, 3],
    ['trappingScale', 327.1, 1],
    ['wallRadius', 55.0, 1],
    ['dy', 27.8, 1],
    ['thinning', 0.19, 2],
  ])('derives %s = %f', (id, expected, decimals) => {
    expect(number(result, id)).toBeCloseTo(expected, decimals);
  });
  it('finds dx/L_eq 0.085, 2.01 cells in the Munk layer, walls at 5.95 L_eq, twice the memory 2231 d', () => {
    const { dx, trapping, memory } = scalesOf(corvaneSetup());
    expect(dx / trapping!).toBeCloseTo(0.085, 3);
    expect(row(result, 'wall-layer').value).toBeCloseTo(2.01, 2);
    expect(row(result, 'poleward-walls').value).toBeCloseTo(5.95, 2);
    expect(row(result, 'length').limit).toBeCloseTo(2231, 0);
    expect((2 * memory) / 86_400).toBe(row(result, 'length').limit);
  });
  it('expects 0.21 and 0.24 of a nonlinear layer at strengths 1 and 1.2', () => {
    const nonlinear = (strength: number) => {
      const e = number(preflight(corvaneSetup(strength)), 'thinning');
      return 1 - Math.sqrt(1 - 2 * e);
    };
    expect(nonlinear(1)).toBeCloseTo(0.21, 2);
    expect(nonlinear(1.2)).toBeCloseTo(0.24, 2);
  });
  it('proposes 16 steps a day', () => {
    expect(proposeStepsPerDay(corvaneSetup())).toBe(16);
    expect(result.proposedStepsPerDay).toBe(16);
  });
  it('heads its numbers with the six that the form shows on top', () => {
    expect(result.derived.slice(0, 6).map(({ id }) => id)).toEqual([
      'waveSpeed',
      'trappingScale',
      'munkWidth',
      'kelvinCrossing',
      'rossbyCrossing',
      'adjustment',
    ]);
  });
  it('counts its work and its disk', () => {
    const { cost } = preflight(corvaneSetup(), { cellStepsPerSecond: 40e6 });
    expect(cost).toMatchObject({ cells: 33_600, steps: 40_880, frames: 512, cellStepsPerSecond: 40e6 });
    expect(cost.wetCells).toBe(buildGrid(corvaneSetup()).wetCells);
    expect(cost.seconds).toBeCloseTo((33_600 * 40_880) / 40e6, 9);
    const points = 240 * 140 + 241 * 140 + 240 * 141;
    expect(cost.diskBytes).toBeGreaterThan(512 * points * 4 + 2 * 9 * 8 * 33_600);
    expect(cost.diskBytes).toBeLessThan(1.1 * (512 * points * 4 + 2 * 9 * 8 * 34_200) + 2e6);
  });
});

describe('ready setups', () => {
  it.each(PRESETS.map(({ id, setup }) => [id, setup] as const))('%s passes every row', (_, setup) => {
    const result = preflight(setup, { quotaBytes: 20e9, freeDiskBytes: 20e9 });
    expect(result.checks.filter((check) => check.verdict !== 'pass')).toEqual([]);
    expect(result.notes).toEqual([]);
  });
  it('have names and ids of their own', () => {
    expect(new Set(PRESETS.map(({ id }) => id)).size).toBe(PRESETS.length);
    expect(new Set(PRESETS.map(({ name }) => name)).size).toBe(PRESETS.length);
  });
});

// numerics.md §10: c = 2.5 m/s, β = 2.3e-11; figures [memory, re-derived]: f = 2Ω sin φ, β = 2Ω cos φ/a there.
describe('scales of the trade', () => {
  const plane = (latitude: number) =>
    scalesOf(
      changed(({ basin, layer }) => {
        Object.assign(basin, {
          geometry: 'midlatitude',
          southDeg: latitude - 1,
          northDeg: latitude + 1,
          referenceLatitudeDeg: latitude,
          westernCoast: { kind: 'rectangular' },
          islands: [],
        });
        Object.assign(layer, { reducedGravityMS2: 0.04, restThicknessM: 156.25 });
      }),
    );
  it.each([
    [5, 196.7, 0.882],
    [10, 98.7, 0.2197],
    [20, 50.1, 0.054],
    [30, 34.3, 0.0233],
    [40, 26.7, 0.0125],
  ])('at %i°: c/f %f km, βc²/f² %f m/s', (latitude, radiusKm, speed) => {
    const { c, f0, beta } = plane(latitude);
    expect(c).toBe(2.5);
    expect(Math.abs(c / f0 / 1000 - radiusKm)).toBeLessThan(0.05); // half the last digit
    expect((beta * c * c) / (f0 * f0) / speed).toBeCloseTo(1, 2);
  });
  it('L_eq 329.7 km and T 1.526 d at β = 2.3e-11', () => {
    const result = preflight(
      changed(({ basin, layer }) => {
        basin.betaPerMS = 2.3e-11;
        Object.assign(layer, { reducedGravityMS2: 0.04, restThicknessM: 156.25 });
      }),
    );
    expect(number(result, 'trappingScale')).toBeCloseTo(329.7, 1);
    expect(number(result, 'equatorialTime')).toBeCloseTo(1.526, 3);
  });
  it.each([
    [0.01, 100, 1.0],
    [0.02, 150, 1.7321],
    [0.03, 150, 2.1213],
    [0.03, 250, 2.7386],
    [0.05, 200, 3.1623],
  ])('g′ %f and H %i give c %f', (reducedGravityMS2, restThicknessM, c) => {
    const setup = changed(({ layer }) => Object.assign(layer, { reducedGravityMS2, restThicknessM }));
    expect(scalesOf(setup).c).toBeCloseTo(c, 4);
  });
  it.each([
    [100, 17],
    [500, 29],
    [1000, 37],
    [2000, 46],
    [5000, 63],
    [1e4, 79],
  ])('A = %i has a Munk width of %i km at β = 2e-11', (viscosityM2S, km) => {
    const setup = changed(({ friction, basin }) => {
      friction.viscosityM2S = viscosityM2S;
      basin.betaPerMS = 2e-11;
    });
    expect(Math.round(scalesOf(setup).munk! / 1000)).toBe(km);
  });
  it('crosses 10 000 km in 46 d (Kelvin), 139 d (Rossby, n = 1), 5.9 y at 20° and 13.6 y at 30°', () => {
    const wide = (latitude: number) =>
      preflight(
        changed(({ basin, layer }) => {
          Object.assign(basin, {
            eastDeg: 1e7 / 111_194.926_6,
            southDeg: -latitude,
            northDeg: latitude,
            islands: [],
            westernCoast: { kind: 'rectangular' },
          });
          Object.assign(layer, { reducedGravityMS2: 0.04, restThicknessM: 156.25 });
        }),
      );
    expect(number(wide(20), 'kelvinCrossing')).toBeCloseTo(46.3, 1);
    expect(number(wide(20), 'rossbyCrossing')).toBeCloseTo(139, 0);
    // The years are of the sphere's f and β at that latitude; on the plane βy they come out otherwise.
    const years = (latitude: number) => {
      const { beta, c, f0 } = plane(latitude);
      return (1e7 * f0 * f0) / (beta * c * c) / (365.25 * 86_400);
    };
    expect(years(20)).toBeCloseTo(5.9, 1);
    expect(years(30)).toBeCloseTo(13.6, 1);
  });
});

describe('order and reasons', () => {
  it('shows refusals first, then cautions, then passes by closeness', () => {
    const bad = changed(({ numerics, length, friction }) => {
      numerics.stepsPerDay = 8;
      length.days = 365;
      friction.viscosityM2S = 3000;
    });
    const { checks, verdict } = preflight(bad);
    const rank = { refuse: 0, caution: 1, pass: 2 };
    expect(verdict).toBe('refuse');
    expect(checks.map((check) => rank[check.verdict])).toEqual(checks.map((check) => rank[check.verdict]).sort());
    const passes = checks.filter((check) => check.verdict === 'pass').map((check) => check.ratio);
    expect(passes).toEqual([...passes].sort((a, b) => b - a));
    expect(checks.filter((check) => check.verdict === 'refuse').map(({ id }) => id)).toContain('step-gravity');
  });
});
