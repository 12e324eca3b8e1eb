import { describe, expect, it } from 'vitest';
import { buildGrid } from '../grid/build-grid';
import { corvaneSetup } from '../presets/corvane';
import { PRESETS } from '../presets/presets';
import type { Check, Preflight } from '../preflight-types';
import type { Setup } from '../setup';
import { preflight } from './preflight';
import { applyRemedy } from './remedies';
import { scalesOf } from './scales';
import { proposeStepsPerDay } from './step-limits';

const changed = (change: (setup: Setup) => void, from: Setup = corvaneSetup()): Setup => {
  const setup = structuredClone(from);
  change(setup);
  return setup;
};
const preset = (id: string) => structuredClone(PRESETS.find((one) => one.id === id)!.setup);
const row = (result: Preflight, id: string): Check => {
  const found = result.checks.find((check) => check.id === id);
  if (!found) throw new Error(`no row ${id} among ${result.checks.map((check) => check.id).join(', ')}`);
  return found;
};
const number = (result: Preflight, id: string) => result.derived.find((one) => one.id === id)!.value;

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

describe('resolution', () => {
  const spacing = (degrees: number, from = corvaneSetup()) =>
    changed(({ numerics }) => {
      numerics.spacingLongitudeDeg = numerics.spacingLatitudeDeg = degrees;
      numerics.stepsPerDay = 24;
    }, from);
  it.each([
    [0.5, 'pass', 'caution'],
    [1.25, 'caution', 'caution'],
    [3.5, 'refuse', 'caution'],
  ])('%f° cells: equatorial %s, coastal %s', (degrees, equatorial, coastal) => {
    const result = preflight(spacing(degrees));
    expect(row(result, 'equatorial-resolution').verdict).toBe(equatorial);
    expect(row(result, 'coastal-waves').verdict).toBe(coastal);
  });
  it('says when coastal waves are not represented at all, and cures it with cells that fill the basin', () => {
    const setup = spacing(1.25);
    const { reason, remedy } = row(preflight(setup), 'coastal-waves');
    expect(reason).toContain('not represented');
    const after = preflight(applyRemedy(setup, remedy!));
    expect(row(after, 'coastal-waves').verdict).toBe('pass');
    expect(after.notes).toEqual([]);
  });
  it('asks for two cells in a Munk layer or one in a Stommel layer', () => {
    const friction = (viscosityM2S: number, rayleighPerS: number) =>
      changed((setup) => {
        Object.assign(setup.friction, { viscosityM2S, rayleighPerS });
      });
    expect(row(preflight(friction(3900, 0)), 'wall-layer')).toMatchObject({ verdict: 'caution', limit: 2 });
    expect(row(preflight(friction(0, 6.4e-7)), 'wall-layer')).toMatchObject({ verdict: 'pass', limit: 1 });
    expect(row(preflight(friction(0, 6.3e-7)), 'wall-layer').verdict).toBe('caution');
    const none = row(preflight(friction(0, 0)), 'wall-layer');
    expect(none.reason).toContain('pile up at grid scale');
    expect(Number.isFinite(none.ratio)).toBe(true);
    expect(preflight(applyRemedy(friction(0, 0), none.remedy!)).verdict).toBe('pass');
  });
  it('measures the poleward walls in trapping scales and moves them out', () => {
    const near = changed(({ basin }) => {
      basin.southDeg = -8;
      basin.islands = [];
      basin.westernCoast = { kind: 'rectangular' };
    });
    near.output.sections = near.output.sections.filter(({ atDeg }) => atDeg > -8);
    const check = row(preflight(near), 'poleward-walls');
    expect(check.value).toBeCloseTo(8 / 2.942, 2);
    expect(check.verdict).toBe('caution');
    expect(check.remedy).toEqual({
      label: 'Move to 14.75° S',
      changes: [{ pointer: '/basin/southDeg', value: -14.75 }],
    });
    expect(row(preflight(applyRemedy(near, check.remedy!)), 'poleward-walls').verdict).toBe('pass');
  });
  it('takes a wall on the equator for symmetry', () => {
    const half = changed(({ basin, output }) => {
      basin.southDeg = 0;
      basin.islands = [];
      output.sections = [];
      output.moorings = [];
    });
    expect(row(preflight(half), 'poleward-walls').value).toBeCloseTo(5.95, 2);
  });
  it('shows no row that does not apply', () => {
    const ids = (setup: Setup) => preflight(setup).checks.map(({ id }) => id);
    const fplane = ids(preset('adjustment'));
    for (const id of ['equatorial-resolution', 'wall-layer', 'poleward-walls', 'length', 'step-viscosity'])
      expect(fplane).not.toContain(id);
    expect(ids(preset('kelvin-channel'))).not.toContain('wall-layer');
    expect(ids(preset('subtropical-gyre'))).not.toContain('poleward-walls');
    expect(ids(corvaneSetup())).not.toContain('disk-quota');
  });
});

describe('wind, length and output', () => {
  it('thins in proportion to the wind, and scales it back', () => {
    const strong = changed(({ wind }) => {
      for (const { pattern } of wind.components) {
        if (pattern.kind === 'linearShear') pattern.stressNM2 *= 3;
        if (pattern.kind === 'zonalBelt') pattern.amplitudeNM2 *= 3;
      }
    });
    const check = row(preflight(strong), 'thinning');
    expect(check.value / row(preflight(corvaneSetup()), 'thinning').value).toBeCloseTo(3, 9);
    expect(check.reason).toContain('do not hold');
    expect(check.remedy!.label).toBe('Wind × 0.44');
    expect(preflight(applyRemedy(strong, check.remedy!)).verdict).toBe('pass');
  });
  it('counts a patch of wind over its own width, not over the basin', () => {
    const patch = (widthLongitudeDeg: number) =>
      changed(({ wind }) => {
        wind.components = [
          {
            name: 'Patch',
            pattern: {
              kind: 'gaussianPatch',
              direction: 'eastward',
              amplitudeNM2: 0.05,
              longitudeDeg: 30,
              latitudeDeg: 0,
              widthLongitudeDeg,
              widthLatitudeDeg: 3,
            },
            season: { ...corvaneSetup().wind.components[0].season },
          },
        ];
      });
    // On the equator τx √(2π) w/(g′ρ0H²): 0.05 × 2.5066 × 5° = 1.3937e6 m over 1.23e6.
    const expected = (0.05 * Math.sqrt(2 * Math.PI) * 5 * 111_194.9266) / (0.03 * 1025 * 200 * 200);
    expect(row(preflight(patch(5)), 'thinning').value).toBeGreaterThanOrEqual(expected * 0.999);
    expect(row(preflight(patch(5)), 'thinning').value).toBeLessThan(3 * expected);
    expect(row(preflight(patch(2.5)), 'thinning').value).toBeCloseTo(row(preflight(patch(5)), 'thinning').value / 2, 6);
  });
  it('counts the amplitude of an analytic start', () => {
    const bump = changed((setup) => {
      setup.start = {
        kind: 'bump',
        amplitudeM: 80,
        longitudeDeg: 30,
        latitudeDeg: 0,
        widthLongitudeDeg: 5,
        widthLatitudeDeg: 5,
      };
    });
    const check = row(preflight(bump), 'thinning');
    expect(check).toMatchObject({
      value: 0.4,
      verdict: 'caution',
      pointers: ['/start/amplitudeM', '/layer/restThicknessM'],
    });
    expect(row(preflight(applyRemedy(bump, check.remedy!)), 'thinning').verdict).toBe('pass');
  });
  it('asks for twice the memory, in whole years', () => {
    const short = changed(({ length }) => (length.days = 365));
    const check = row(preflight(short), 'length');
    expect(check).toMatchObject({ verdict: 'caution', value: 365 });
    expect(check.remedy).toEqual({ label: 'Use 7 years', changes: [{ pointer: '/length/days', value: 2555 }] });
  });
  it.each([
    ['damped', 1 / (100 * 86_400), 0, 4 * 31.52], // 1/κ is below four Kelvin crossings
    ['damped weakly', 1 / (1000 * 86_400), 0, 1000],
    ['free', 0, 1e-7, 1115.6],
  ])('remembers: %s', (_, dampingPerS, rayleighPerS, memoryDays) => {
    const setup = changed(({ layer, friction }) => {
      layer.dampingPerS = dampingPerS;
      friction.rayleighPerS = rayleighPerS;
    });
    expect(scalesOf(setup).memory / 86_400 / memoryDays).toBeCloseTo(1, 3);
  });
  it('remembers on an f-plane for as long as friction lets it', () => {
    const fplane = (rayleighPerS: number) =>
      scalesOf(changed(({ friction }) => (friction.rayleighPerS = rayleighPerS), preset('adjustment'))).memory;
    expect(fplane(0)).toBeCloseTo((4 * 81_322.8) / 2.449_49, 0);
    expect(fplane(1e-6)).toBe(1e6);
  });
  it('counts the days that a start from a state has behind it', () => {
    const extended = changed((setup) => {
      setup.length.days = 365;
      setup.start = {
        kind: 'state',
        runId: '5c2d7c1e-6f5b-4a57-9d0a-0c7a1c3f9b11',
        fingerprint: 'a'.repeat(64),
        stateSha256: 'b'.repeat(64),
        startStep: 16 * 2555,
        stepsPerDay: 16,
      };
    });
    expect(row(preflight(extended), 'length')).toMatchObject({ verdict: 'pass', value: 2920 });
    const other = changed((setup) => (setup.numerics.stepsPerDay = 20), extended);
    expect(row(preflight(other), 'start-step').verdict).toBe('caution');
    Object.assign(other.start, { startStep: 16 * 2555 + 1 });
    const refused = row(preflight(other), 'start-step');
    expect(refused.verdict).toBe('refuse');
    expect(preflight(applyRemedy(other, refused.remedy!)).checks.map(({ id }) => id)).not.toContain('start-step');
  });
  it('warns when the last days have no record', () => {
    const odd = changed(({ output }) => (output.frameIntervalDays = 8));
    const check = row(preflight(odd), 'intervals');
    expect(check).toMatchObject({ verdict: 'caution', value: 3 });
    expect(check.reason).toContain('no record of frames');
    expect(row(preflight(applyRemedy(odd, check.remedy!)), 'intervals').verdict).toBe('pass');
  });
  it('sees a wave that does not close on itself, and one off the equatorial plane', () => {
    const open = changed((setup) => Object.assign(setup.start, { wavelengthDeg: 30 }), preset('kelvin-channel'));
    const check = row(preflight(open), 'start-waves');
    expect(check.verdict).toBe('caution');
    expect(preflight(applyRemedy(open, check.remedy!)).verdict).toBe('pass');
    const off = changed((setup) => (setup.basin.geometry = 'midlatitude'), preset('kelvin-channel'));
    const refused = row(preflight(off), 'start-mode');
    expect(refused.verdict).toBe('refuse');
    expect(preflight(applyRemedy(off, refused.remedy!)).checks.map(({ id }) => id)).not.toContain('start-mode');
  });
  it('says when nothing would move', () => {
    const calm = changed((setup) => (setup.wind.components = []));
    expect(row(preflight(calm), 'nothing-moves').verdict).toBe('caution');
  });
});

describe('size, disk and places', () => {
  it('refuses an oversize grid with the limit, and offers cells that fit', () => {
    const fine = changed(({ numerics }) => (numerics.spacingLongitudeDeg = numerics.spacingLatitudeDeg = 0.01));
    const check = row(preflight(fine), 'cells');
    expect(check).toMatchObject({ verdict: 'refuse', value: 6000 * 3500, limit: 4_000_000 });
    expect(check.reason).toMatch(/at most 4.000.000 cells/);
    expect(() => buildGrid(fine)).toThrow(RangeError);
    const after = applyRemedy(fine, check.remedy!);
    expect(row(preflight(after), 'cells').verdict).toBe('pass');
    expect(buildGrid(after).nx).toBeLessThan(6000);
  });
  it('answers for a grid of a hundred million cells without making it', () => {
    const huge = changed(({ numerics }) => (numerics.spacingLongitudeDeg = numerics.spacingLatitudeDeg = 0.004));
    const result = preflight(huge);
    expect(result.cost.cells).toBeGreaterThan(1e8);
    expect(result.cost.wetCells / result.cost.cells).toBeCloseTo(31_824 / 33_600, 3);
    expect(row(result, 'cells').remedy!.label).toMatch(/^Use 0.0(32|25|64)/);
  });
  it('refuses cells finer than the hard limit in km', () => {
    const polar = changed(({ basin, numerics, output }) => {
      Object.assign(basin, {
        geometry: 'fplane',
        eastDeg: 1,
        southDeg: 79,
        northDeg: 80,
        islands: [],
        westernCoast: { kind: 'rectangular' },
      });
      Object.assign(numerics, { spacingLongitudeDeg: 0.02, spacingLatitudeDeg: 0.02 });
      output.sections = [];
      output.moorings = [];
    });
    const check = row(preflight(polar), 'spacing');
    expect(check).toMatchObject({ verdict: 'refuse', limit: 0.5, unit: 'km' });
    expect(() => buildGrid(polar)).toThrow(/between 0.5 and 600 km/);
    expect(() => buildGrid(applyRemedy(polar, check.remedy!))).not.toThrow();
  });
  it('weighs disk against quota and free space, and keeps frames more rarely', () => {
    const { diskBytes } = preflight(corvaneSetup()).cost;
    const within = (share: number) => preflight(corvaneSetup(), { quotaBytes: diskBytes / share, freeDiskBytes: 1e12 });
    expect([0.4, 0.6, 1.01].map((share) => row(within(share), 'disk-quota').verdict)).toEqual([
      'pass',
      'caution',
      'refuse',
    ]);
    const refused = row(within(1.01), 'disk-quota');
    const after = applyRemedy(corvaneSetup(), refused.remedy!);
    expect(after.output.frameIntervalDays).toBeGreaterThan(5);
    expect(row(preflight(after, { quotaBytes: diskBytes / 1.01 }), 'disk-quota').verdict).toBe('pass');
    expect(row(preflight(corvaneSetup(), { freeDiskBytes: 0 }), 'disk-free').verdict).toBe('refuse');
  });
  it('names the section and the mooring that lie on land, and moves the mooring to the nearest water', () => {
    const dry = changed(({ output, basin }) => {
      basin.islands.push({ kind: 'box', name: 'Bar', westDeg: -1, eastDeg: 61, southDeg: 3, northDeg: 4 });
      output.sections.push({ name: 'Over the bar', along: 'latitude', atDeg: 3.5 });
      output.sections.push({ name: 'On the wall', along: 'longitude', atDeg: 60 });
      output.moorings.push({ name: 'Aground', longitudeDeg: 42, latitudeDeg: -7 });
    });
    const result = preflight(dry);
    const sections = row(result, 'sections');
    expect(sections).toMatchObject({
      verdict: 'caution',
      pointers: ['/output/sections/4/atDeg', '/output/sections/5/atDeg'],
    });
    expect(sections.reason).toContain('“Over the bar”, “On the wall” lie on land');
    const moorings = row(result, 'moorings');
    expect(moorings).toMatchObject({ verdict: 'refuse', value: 5, limit: 6 });
    expect(moorings.reason).toContain('“Aground”');
    const after = preflight(applyRemedy(applyRemedy(dry, sections.remedy!), moorings.remedy!));
    expect(row(after, 'sections').verdict).toBe('pass');
    expect(row(after, 'moorings').verdict).toBe('pass');
  });
  it('refuses a basin without water', () => {
    const dry = changed(({ basin, output }) => {
      basin.westernCoast = { kind: 'slanting', atSouthDeg: 90, atNorthDeg: 90 };
      output.sections = [];
      output.moorings = [];
    });
    expect(row(preflight(dry), 'water').verdict).toBe('refuse');
    expect(() => buildGrid(dry)).toThrow(RangeError);
  });
  it('tells what snapping moved', () => {
    const { notes } = preflight(changed(({ basin }) => (basin.southDeg = -17.4)));
    expect(notes).toHaveLength(1);
    expect(notes[0]).toContain('equator');
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
