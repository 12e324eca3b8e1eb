import { describe, expect, it } from 'vitest';
import { corvaneSetup } from '../presets/corvane';
import type { Setup } from '../setup';
import { preflight } from './preflight';
import { applyRemedy } from './remedies';
import { scalesOf } from './scales';
import { changed, preset, row } from './testing';

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
  it('says that an f-plane at the equator does not rotate', () => {
    const plane = (referenceLatitudeDeg: number) =>
      changed(({ basin }) => {
        Object.assign(basin, { geometry: 'fplane', referenceLatitudeDeg });
      });
    expect(row(preflight(plane(0)), 'no-rotation')).toMatchObject({ verdict: 'caution', remedy: null });
    expect(preflight(plane(1)).checks.map(({ id }) => id)).not.toContain('no-rotation');
  });
  it('refuses an equatorial wave where nothing rotates', () => {
    const still = changed(({ constants }) => {
      constants.rotationRatePerS = 0;
    }, preset('kelvin-channel'));
    const result = preflight(still);
    expect(row(result, 'start-mode')).toMatchObject({ verdict: 'refuse', remedy: { label: 'Start from rest' } });
    expect(row(result, 'no-rotation').verdict).toBe('caution');
  });
});
