import { expect, it } from 'vitest';
import { stressAt } from '../forcing/season';
import { deriveMap } from '../derive/derive';
import { buildGrid } from '../grid/build-grid';
import { corvaneSetup, steadyBelt, yearly } from '../presets/corvane';
import { PRESETS } from '../presets/presets';
import type { Setup, WindComponent } from '../setup';
import { windDiagram } from './wind-diagram';

const withWind = (setup: Setup, ...components: WindComponent[]): Setup => ({
  ...structuredClone(setup),
  wind: { components, seasonalStrength: 1, stressFloorM: 0 },
});
const largest = (values: Float32Array) =>
  values.reduce((most, value) => (Number.isNaN(value) ? most : Math.max(most, Math.abs(value))), 0);

it('gives the stress that the core gives, at every latitude and day', () => {
  const setup = corvaneSetup(1.2);
  const { latDeg, day, taux, tauy, shape, longitudeDeg } = windDiagram(setup, { rows: 20, columns: 12 });
  expect(shape).toEqual([20, 12]);
  for (let j = 0; j < 20; j++)
    for (let k = 0; k < 12; k++) {
      const stress = stressAt(setup, longitudeDeg, latDeg[j], day[k]);
      expect(taux[j * 12 + k]).toBeCloseTo(stress.taux, 8);
      expect(tauy[j * 12 + k]).toBeCloseTo(stress.tauy, 8);
    }
});

it('shows the wind as it is once it is switched on', () => {
  const belt = steadyBelt('Slow', 0.02, 5, 4);
  belt.season.switchOnDays = 400;
  const settled = windDiagram(withWind(corvaneSetup(), belt));
  expect(largest(settled.taux)).toBeCloseTo(0.02, 4);
});

// The trade: a wind that is linear in latitude about the equator pumps nothing (numerics.md §12, verification.md case h).
it('finds no pumping under the linear shear where its taper is full, and its curl −a there', () => {
  const shear = corvaneSetup().wind.components[2];
  const { latDeg, day, curl, pumping, shape, blankWithinDeg } = windDiagram(withWind(corvaneSetup(), shear));
  expect(blankWithinDeg).toBeCloseTo(2.942, 3); // 327 km
  const pentadOfPeak = Math.floor(196 / 5);
  expect(day[pentadOfPeak]).toBeCloseTo(197.5, 12);
  const season = Math.cos((2 * Math.PI * 1.5) / 365);
  latDeg.forEach((latitude, j) => {
    const cell = j * shape[1] + pentadOfPeak;
    if (Math.abs(latitude) < blankWithinDeg!) expect(pumping[cell]).toBeNaN();
    else if (Math.abs(latitude) < 9.9) {
      expect(Math.abs(pumping[cell])).toBeLessThan(1e-12);
      expect(curl[cell]).toBeCloseTo((-0.03 / 1.5e6) * season, 14);
    }
  });
  // In the taper it pumps: a few 1e-6 m/s.
  expect(largest(pumping)).toBeGreaterThan(1e-6);
});

it('gives the curl and pumping of a uniform and of a patchy wind on an f-plane', () => {
  const plane = PRESETS.find(({ id }) => id === 'adjustment')!.setup;
  const uniform: WindComponent = {
    name: '',
    pattern: { kind: 'uniform', eastwardNM2: 0.1, northwardNM2: 0.05 },
    season: yearly(0),
  };
  const even = windDiagram(withWind(plane, uniform));
  expect(largest(even.curl)).toBe(0);
  expect(largest(even.pumping)).toBe(0);
  expect(even.blankWithinDeg).toBeNull();
  const patch: WindComponent = {
    name: '',
    pattern: {
      kind: 'gaussianPatch',
      direction: 'northward',
      amplitudeNM2: 0.1,
      longitudeDeg: 0.5,
      latitudeDeg: 43,
      widthLongitudeDeg: 0.5,
      widthLatitudeDeg: 100,
    },
    season: { ...yearly(0), mean: 1, annual: { amplitude: 0, peakDay: 0 } },
  };
  // One width east of the centre: ∂τy/∂x = −A e^(−1/2)/width, with a degree of longitude as long as at 43° N.
  const east = windDiagram(withWind(plane, patch), { longitudeDeg: 1 });
  const width = 0.5 * 111_194.93 * Math.cos((43 * Math.PI) / 180);
  const curl = (-0.1 * Math.exp(-0.5)) / width;
  const middle = 70 * east.shape[1];
  expect(east.curl[middle] / curl).toBeCloseTo(1, 4);
  expect(east.pumping[middle] / (curl / 1025 / 1e-4)).toBeCloseTo(1, 4);
});

// On a sphere a uniform eastward stress pumps −(τ/(ρ0 a cos φ)) ∂φ(cos φ/(2Ω sin φ)) = τ/(2Ω ρ0 a cos φ sin² φ): the
// derivative by hand, common practice.
it('has the metric term of the sphere, in the diagram and on the map alike', () => {
  const setup = withWind(corvaneSetup(), {
    name: 'Uniform',
    pattern: { kind: 'uniform', eastwardNM2: 0.1, northwardNM2: 0 },
    season: {
      mean: 1,
      switchOnDays: 0,
      annual: { amplitude: 0, peakDay: 0 },
      semiannual: { amplitude: 0, peakDay: 0 },
    },
  });
  Object.assign(setup.basin, {
    geometry: 'spherical',
    southDeg: 20,
    northDeg: 60,
    islands: [],
    westernCoast: { kind: 'rectangular' },
  });
  const exact = (latitude: number) => {
    const phi = (latitude * Math.PI) / 180;
    return 0.1 / (2 * 7.2921e-5 * 1025 * 6.371e6 * Math.cos(phi) * Math.sin(phi) ** 2);
  };
  const { latDeg, pumping, shape } = windDiagram(setup);
  latDeg.forEach((latitude, j) => expect(pumping[j * shape[1]] / exact(latitude)).toBeCloseTo(1, 5));
  const grid = buildGrid(setup);
  const map = deriveMap('ekmanPumping', grid, setup, { day: 0 }).data;
  grid.latCentre.forEach((latitude, j) => expect(map[j * grid.nx] / exact(latitude)).toBeCloseTo(1, 3));
});
