import { describe, expect, it } from 'vitest';
import { buildGrid, deriveMap, Integration, stressAt, type Setup, type WindComponent } from '@halfdeep/ocean';
import { corvaneForCheck, smallSetup } from '../../libs/ocean/src/testing/setups';
import { proveCase } from './record';

// Facts of the trade (common practice, no source).
const NEVER = { amplitude: 0, peakDay: 0 };
const STEADY = { mean: 1, switchOnDays: 0, annual: NEVER, semiannual: NEVER };

function basinWith(pattern: WindComponent['pattern'], days: number): Setup {
  const setup = smallSetup();
  return {
    ...setup,
    basin: { ...setup.basin, southDeg: -15, northDeg: 15, eastDeg: 40, islands: [] },
    wind: { components: [{ name: '', pattern, season: STEADY }], seasonalStrength: 1, stressFloorM: 0 },
    friction: { rayleighPerS: 1e-6, viscosityM2S: 4000, viscosityPatches: [], slip: 'free' },
    length: { days },
  };
}

/** Northward transport per width, m²/s, on a row, in the middle of the basin, as the mean of the second half of a run. */
function interiorTransport(setup: Setup, latitudes: number[]): number[] {
  const run = Integration.start(setup);
  const { grid } = run;
  const sums = latitudes.map(() => 0);
  const steps = run.totalSteps;
  let count = 0;
  for (let n = 0; n < steps; n += 4) {
    run.advance(4);
    if (n < steps / 2) continue;
    const { v } = run.frame();
    latitudes.forEach((latitude, k) => {
      const j = Math.round((latitude - grid.latFace[0]) / (grid.latFace[1] - grid.latFace[0]));
      let mean = 0;
      for (let i = 30; i < 50; i++) mean += v[j * grid.nx + i] / 20;
      sums[k] += mean * setup.layer.restThicknessM;
    });
    count += 1;
  }
  return sums.map((sum) => sum / count);
}

describe('facts of the trade', () => {
  it('transport is to the right of the wind north of the equator and to the left of it south', (context) => {
    const uniform = basinWith({ kind: 'uniform', eastwardNM2: 0.03, northwardNM2: 0 }, 20);
    const [north, south] = interiorTransport(uniform, [10, -10]);
    expect(north).toBeLessThan(0); // right of eastward
    expect(south).toBeGreaterThan(0); // left of eastward
    // In magnitude the Ekman transport τx/(ρ0 f), before Rossby waves have brought the Sverdrup balance.
    const f = 2 * 7.2921e-5 * (10 / 180) * Math.PI;
    for (const [id, obtained, expected] of [
      ['10° N', north, -0.03 / (1025 * f)],
      ['10° S', south, 0.03 / (1025 * f)],
    ] as const)
      proveCase(context, 'y', {
        id: `Ekman ${id}`,
        quantity: `northward transport under an eastward wind at ${id}, m²/s`,
        expected,
        obtained,
        tolerance: 0.15,
        resolution: 'half a degree, mean of days 10 to 20',
      });
  });

  it('wind that is linear in latitude about the equator pumps nothing and still carries water across', (context) => {
    const shear = {
      kind: 'linearShear',
      stressNM2: 0.03,
      overDistanceKm: 1500,
      fullWithinDeg: 14,
      zeroBeyondDeg: 20,
    } as const;
    const setup = basinWith(shear, 60);
    const grid = buildGrid(setup);
    const fields = Integration.start(setup).frame();
    const pumping = deriveMap('ekmanPumping', grid, setup, fields);
    // Within 13°, where the differences do not reach the taper; 1 m a day would be 1e-5 m/s.
    pumping.data.forEach((w, k) => {
      if (!Number.isNaN(w) && Math.abs(grid.latCentre[Math.floor(k / grid.nx)]) < 13)
        expect(Math.abs(w)).toBeLessThan(1e-18);
    });
    const expected = -(0.03 / 1.5e6) / (1025 * grid.beta);
    interiorTransport(setup, [-5, 0, 5]).forEach((obtained, k) =>
      proveCase(context, 'y', {
        id: `no pumping ${['5° S', 'equator', '5° N'][k]}`,
        quantity: `northward transport under τx = a y at ${['5° S', 'the equator', '5° N'][k]}, m²/s`,
        expected,
        obtained,
        tolerance: 0.05,
        resolution: 'mean of days 30 to 60',
      }),
    );
  });

  it('blows from the winter into the summer hemisphere and carries the layer the other way, both reversed half a year later', (context) => {
    const setup = corvaneForCheck();
    setup.numerics = { ...setup.numerics, spacingLongitudeDeg: 1, spacingLatitudeDeg: 0.5, stepsPerDay: 8 };
    setup.friction = { ...setup.friction, viscosityM2S: 20_000 };
    setup.wind.components = setup.wind.components.slice(2); // the seasonal part alone
    const july = 196;
    const january = july - 182.5;
    for (const [day, sign] of [
      [july, 1],
      [january, -1],
    ] as const) {
      // Eastward north of the equator and westward south of it in northern summer.
      expect(Math.sign(stressAt(setup, 30, 8, day).taux)).toBe(sign);
      expect(Math.sign(stressAt(setup, 30, -8, day).taux)).toBe(-sign);
      expect(Math.abs(stressAt(setup, 30, 0, day).taux)).toBe(0);
    }
    const run = Integration.start({ ...setup, length: { days: 2 * 365 } });
    run.advance(365 * 8);
    const transport = run.sectionColumns().findIndex(({ name }) => name === '0.transport');
    run.takeSections();
    const months: number[] = [];
    for (let k = 0; k < 12; k++) {
      run.advance(243);
      months.push(run.takeSections()[transport]);
    }
    // Southward in northern summer (June to August), northward half a year later.
    const resolution = '1° × 0.5°, monthly means of the second year';
    proveCase(context, 'y', {
      id: 'northern summer',
      quantity: 'largest monthly transport across the equator, June to August, Sv, at most',
      expected: -2,
      obtained: Math.max(...[5, 6, 7].map((month) => months[month])),
      kind: 'atMost',
      resolution,
    });
    proveCase(context, 'y', {
      id: 'northern winter',
      quantity: 'least monthly transport across the equator, December to February, Sv, at least',
      expected: 2,
      obtained: Math.min(...[11, 0, 1].map((month) => months[month])),
      kind: 'atLeast',
      resolution,
    });
  });

  describe('a linear run', () => {
    const stateWith = (change: (setup: Setup) => void): number[] => {
      const setup = smallSetup();
      change(setup);
      const run = Integration.start(setup);
      run.advance(run.totalSteps);
      const { eta, u, v } = run.fields();
      return [...eta, ...u, ...v];
    };
    it('answers a scaled wind in exact proportion', (context) => {
      const once = stateWith(() => undefined);
      const twice = stateWith((setup) => scaleWind(setup, 2));
      once.forEach((value, k) => expect(twice[k]).toBe(2 * value));
      const more = stateWith((setup) => scaleWind(setup, 1.2));
      const largest = once.reduce((most, value) => Math.max(most, Math.abs(value)), 0);
      proveCase(context, 'y', {
        id: 'proportion',
        quantity: 'state under 1.2 times the wind less 1.2 times the state, over the largest value',
        expected: 0,
        obtained: once.reduce((most, value, k) => Math.max(most, Math.abs(more[k] - 1.2 * value)), 0) / largest,
        kind: 'absolute',
        tolerance: 1e-12,
        resolution: '20 days',
      });
    });
    it('is affine in the seasonal strength: strong − control = control − weak', (context) => {
      const [weak, control, strong] = [0.8, 1, 1.2].map((s) =>
        stateWith((setup) => {
          setup.wind.seasonalStrength = s;
        }),
      );
      const largest = strong.reduce((most, value, k) => Math.max(most, Math.abs(value - control[k])), 0);
      expect(largest).toBeGreaterThan(0);
      proveCase(context, 'y', {
        id: 'affine',
        quantity: '(strong − control) − (control − weak) over the largest difference',
        expected: 0,
        obtained:
          control.reduce((most, value, k) => Math.max(most, Math.abs(strong[k] - value - (value - weak[k]))), 0) /
          largest,
        kind: 'absolute',
        tolerance: 1e-11,
        resolution: '20 days, seasonal strength 0.8, 1, 1.2',
      });
    });
  });
});

function scaleWind(setup: Setup, factor: number): void {
  for (const { pattern } of setup.wind.components) if ('amplitudeNM2' in pattern) pattern.amplitudeNM2 *= factor;
}
