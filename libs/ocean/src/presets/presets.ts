import { DEFAULT_CONSTANTS } from '../limits';
import type { Basin, Setup } from '../setup';
import { corvaneSetup, steadyBelt, yearly } from './corvane';

/** A ready setup that starts a form: the form shows every field of it. */
export interface OceanPreset {
  id: string;
  name: string;
  /** One or two sentences: what it shows and how long it takes. */
  about: string;
  setup: Setup;
}

/** A closed rectangle on the equatorial plane; presets change what differs. */
const PLAIN_BASIN: Basin = {
  name: '',
  geometry: 'equatorial',
  westDeg: 0,
  eastDeg: 40,
  southDeg: -15,
  northDeg: 15,
  referenceLatitudeDeg: null,
  f0PerS: null,
  betaPerMS: null,
  zonallyPeriodic: false,
  westernCoast: { kind: 'rectangular' },
  islands: [],
  sponges: [],
  coastSpacing: null,
};

/** A coarse equatorial basin under a seasonal shear: the whole job in the time of a few breaths. */
function firstLook(): Setup {
  return {
    schemaVersion: 1,
    constants: { ...DEFAULT_CONSTANTS },
    basin: { ...PLAIN_BASIN, name: 'Small basin' },
    layer: {
      reducedGravityMS2: 0.03,
      restThicknessM: 200,
      dampingPerS: 0,
      temperatureStepK: 15,
      minimumThicknessM: 20,
      entrainment: null,
    },
    wind: {
      components: [
        steadyBelt('Equatorial belt', -0.01, 0, 8),
        {
          name: 'Seasonal shear',
          pattern: { kind: 'linearShear', stressNM2: 0.02, overDistanceKm: 1000, fullWithinDeg: 8, zeroBeyondDeg: 13 },
          season: yearly(196),
        },
      ],
      seasonalStrength: 1,
      stressFloorM: 0,
    },
    start: { kind: 'rest' },
    friction: { rayleighPerS: 1e-8, viscosityM2S: 32_000, viscosityPatches: [], slip: 'free' },
    numerics: { equations: 'linear', spacingLongitudeDeg: 0.5, spacingLatitudeDeg: 0.5, stepsPerDay: 16 },
    length: { days: 1095 },
    output: {
      sections: [
        { name: 'N 8', along: 'latitude', atDeg: 8 },
        { name: 'Equator', along: 'latitude', atDeg: 0 },
        { name: 'S 8', along: 'latitude', atDeg: -8 },
      ],
      moorings: [
        { name: 'West', longitudeDeg: 1, latitudeDeg: 0 },
        { name: 'Centre', longitudeDeg: 20, latitudeDeg: 0 },
        { name: 'East', longitudeDeg: 39, latitudeDeg: 0 },
      ],
      frameIntervalDays: 5,
      sectionIntervalDays: 1,
      mooringIntervalDays: 0.5,
      momentumBudget: false,
      vorticityBudget: false,
    },
  };
}

/** Westerlies over easterlies on a mid-latitude plane: an interior drift closed by a western boundary current. */
function subtropicalGyre(): Setup {
  return {
    schemaVersion: 1,
    constants: { ...DEFAULT_CONSTANTS },
    basin: { ...PLAIN_BASIN, geometry: 'midlatitude', eastDeg: 30, southDeg: 25, northDeg: 45 },
    layer: {
      reducedGravityMS2: 0.02,
      restThicknessM: 500,
      dampingPerS: 0,
      temperatureStepK: 12,
      minimumThicknessM: 20,
      entrainment: null,
    },
    wind: {
      components: [steadyBelt('Westerlies', 0.05, 43, 5), steadyBelt('Easterlies', -0.05, 27, 5)],
      seasonalStrength: 1,
      stressFloorM: 0,
    },
    start: { kind: 'rest' },
    friction: { rayleighPerS: 1e-8, viscosityM2S: 2000, viscosityPatches: [], slip: 'none' },
    numerics: { equations: 'linear', spacingLongitudeDeg: 0.25, spacingLatitudeDeg: 0.25, stepsPerDay: 32 },
    length: { days: 4015 },
    output: {
      sections: [
        { name: 'N 30', along: 'latitude', atDeg: 30 },
        { name: 'N 35', along: 'latitude', atDeg: 35 },
        { name: 'Meridian 15', along: 'longitude', atDeg: 15 },
      ],
      moorings: [
        { name: 'Boundary', longitudeDeg: 0.5, latitudeDeg: 35 },
        { name: 'Interior', longitudeDeg: 15, latitudeDeg: 35 },
      ],
      frameIntervalDays: 5,
      sectionIntervalDays: 1,
      mooringIntervalDays: 1,
      momentumBudget: false,
      vorticityBudget: false,
    },
  };
}

/** A step in the interface on an f-plane, let go at day 0. */
function adjustment(): Setup {
  return {
    schemaVersion: 1,
    constants: { ...DEFAULT_CONSTANTS },
    basin: {
      ...PLAIN_BASIN,
      geometry: 'fplane',
      eastDeg: 1,
      southDeg: 36,
      northDeg: 50,
      referenceLatitudeDeg: 43,
      f0PerS: 1e-4,
      zonallyPeriodic: true,
    },
    layer: {
      reducedGravityMS2: 0.03,
      restThicknessM: 200,
      dampingPerS: 0,
      temperatureStepK: 15,
      minimumThicknessM: 20,
      entrainment: null,
    },
    wind: { components: [], seasonalStrength: 1, stressFloorM: 0 },
    start: { kind: 'step', amplitudeM: 10, latitudeDeg: 43 },
    friction: { rayleighPerS: 0, viscosityM2S: 0, viscosityPatches: [], slip: 'free' },
    numerics: { equations: 'linear', spacingLongitudeDeg: 0.25, spacingLatitudeDeg: 0.1, stepsPerDay: 32 },
    length: { days: 20 },
    output: {
      sections: [{ name: 'Step', along: 'latitude', atDeg: 43 }],
      moorings: [{ name: 'North of it', longitudeDeg: 0.5, latitudeDeg: 43.5 }],
      frameIntervalDays: 0.25,
      sectionIntervalDays: 0.25,
      mooringIntervalDays: 0.25,
      momentumBudget: false,
      vorticityBudget: false,
    },
  };
}

/** One free equatorial wave on its way round a periodic channel. */
function channel(mode: 'kelvin' | 'rossby1', days: number, frameIntervalDays: number): Setup {
  return {
    schemaVersion: 1,
    constants: { ...DEFAULT_CONSTANTS },
    basin: { ...PLAIN_BASIN, zonallyPeriodic: true },
    layer: {
      reducedGravityMS2: 0.03,
      restThicknessM: 200,
      dampingPerS: 0,
      temperatureStepK: 15,
      minimumThicknessM: 20,
      entrainment: null,
    },
    wind: { components: [], seasonalStrength: 1, stressFloorM: 0 },
    start: { kind: 'mode', mode, amplitudeM: 10, wavelengthDeg: 40, crestLongitudeDeg: 20 },
    friction: { rayleighPerS: 0, viscosityM2S: 0, viscosityPatches: [], slip: 'free' },
    numerics: { equations: 'linear', spacingLongitudeDeg: 0.5, spacingLatitudeDeg: 0.5, stepsPerDay: 12 },
    length: { days },
    output: {
      sections: [{ name: 'Equator', along: 'latitude', atDeg: 0 }],
      moorings: [
        { name: 'On the equator', longitudeDeg: 20, latitudeDeg: 0 },
        { name: 'Off the equator', longitudeDeg: 20, latitudeDeg: 4 },
      ],
      frameIntervalDays,
      sectionIntervalDays: 0.5,
      mooringIntervalDays: 0.5,
      momentumBudget: false,
      vorticityBudget: false,
    },
  };
}

/** The first look on a band of the sphere instead of the plane: what the metric terms and the true f change. */
function tropicalBand(): Setup {
  const setup = firstLook();
  return { ...setup, basin: { ...setup.basin, name: 'Tropical band', geometry: 'spherical' } };
}

/** A narrow equatorial basin whose poleward walls are sponges: it behaves like one that is far wider. */
function openPoleward(): Setup {
  const setup = firstLook();
  const sponge = (edge: 'south' | 'north') => ({ edge, widthDeg: 4, peakRatePerS: null, tapersWind: true });
  return {
    ...setup,
    basin: {
      ...setup.basin,
      name: 'Open basin',
      southDeg: -12,
      northDeg: 12,
      sponges: [sponge('south'), sponge('north')],
    },
  };
}

/** Ready setups, the demonstration control first; none is refused by preflight. Clone before changing one. */
export const PRESETS: readonly OceanPreset[] = [
  {
    id: 'corvane',
    name: 'Corvane Basin, Halcyon wind',
    about:
      'Seven years of a seasonal wind that blows across the equator over a slanting western coast and one island: the control of the demonstration.',
    setup: corvaneSetup(),
  },
  {
    id: 'corvane-nonlinear',
    name: 'Corvane Basin, nonlinear',
    about:
      'The same basin and wind with the nonlinear equations: the layer entrains where it gets thin, and response is no longer in proportion to the wind.',
    setup: corvaneSetup(1, 'nonlinear'),
  },
  {
    id: 'first-look',
    name: 'First look',
    about: 'Three years of a seasonal shear over a small, coarse equatorial basin; done in seconds.',
    setup: firstLook(),
  },
  {
    id: 'subtropical-gyre',
    name: 'Subtropical gyre',
    about:
      'Westerlies over easterlies spin up a gyre from rest; planetary waves cross, then the western wall carries the return.',
    setup: subtropicalGyre(),
  },
  {
    id: 'open-poleward',
    name: 'Open poleward edges',
    about:
      'The seasonal shear over a basin of half the height: sponges along both poleward edges take up the waves that walls would send back.',
    setup: openPoleward(),
  },
  {
    id: 'tropical-band',
    name: 'Tropical band on the sphere',
    about:
      'The first look on a band of the sphere: cells get narrower and f follows the sine of latitude. Beside it, the plane shows what that changes.',
    setup: tropicalBand(),
  },
  {
    id: 'adjustment',
    name: 'Adjustment of a step',
    about: 'A step in the interface on an f-plane is let go: waves leave, a jet one deformation radius wide remains.',
    setup: adjustment(),
  },
  {
    id: 'rossby-channel',
    name: 'Equatorial Rossby wave',
    about: 'One free n = 1 Rossby wave travels westward round a periodic channel for a year.',
    setup: channel('rossby1', 365, 2.5),
  },
  {
    id: 'kelvin-channel',
    name: 'Equatorial Kelvin wave',
    about: 'One free Kelvin wave travels eastward round a periodic channel, twice round in about six weeks.',
    setup: channel('kelvin', 50, 0.5),
  },
];
