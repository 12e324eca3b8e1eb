import { DEFAULT_CONSTANTS } from '../limits';
import type { Setup, WindComponent } from '../setup';

const NO_HARMONIC = { amplitude: 0, peakDay: 0 };

/** A small closed equatorial basin with an island and wind of every kind of season; for specs. */
export function smallSetup(change: Partial<Setup> = {}): Setup {
  return {
    schemaVersion: 1,
    constants: DEFAULT_CONSTANTS,
    basin: {
      name: 'Test water',
      geometry: 'equatorial',
      westDeg: 0,
      eastDeg: 20,
      southDeg: -8,
      northDeg: 8,
      referenceLatitudeDeg: null,
      f0PerS: null,
      betaPerMS: null,
      zonallyPeriodic: false,
      westernCoast: { kind: 'rectangular' },
      islands: [{ kind: 'box', name: '', westDeg: 12, eastDeg: 14, southDeg: -4, northDeg: -2 }],
      sponges: [],
      coastSpacing: null,
    },
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
        {
          name: 'trades',
          pattern: { kind: 'zonalBelt', direction: 'eastward', amplitudeNM2: -0.02, latitudeDeg: 4, widthDeg: 3 },
          season: { mean: 1, switchOnDays: 10, annual: NO_HARMONIC, semiannual: NO_HARMONIC },
        },
        {
          name: 'patch',
          pattern: {
            kind: 'gaussianPatch',
            direction: 'northward',
            amplitudeNM2: 0.03,
            longitudeDeg: 7,
            latitudeDeg: 1,
            widthLongitudeDeg: 3,
            widthLatitudeDeg: 2,
          },
          season: {
            mean: 0.5,
            switchOnDays: 0,
            annual: { amplitude: 1, peakDay: 196 },
            semiannual: { amplitude: 0.3, peakDay: 20 },
          },
        },
      ],
      seasonalStrength: 1,
      stressFloorM: 0,
    },
    start: { kind: 'rest' },
    friction: { rayleighPerS: 1e-7, viscosityM2S: 4000, viscosityPatches: [], slip: 'free' },
    numerics: { equations: 'linear', spacingLongitudeDeg: 0.5, spacingLatitudeDeg: 0.5, stepsPerDay: 12 },
    length: { days: 20 },
    output: {
      sections: [
        { name: 'Equator', along: 'latitude', atDeg: 0 },
        { name: 'Middle', along: 'longitude', atDeg: 10 },
      ],
      moorings: [{ name: 'East', longitudeDeg: 18.3, latitudeDeg: 0.2 }],
      frameIntervalDays: 5,
      sectionIntervalDays: 1,
      mooringIntervalDays: 0.25,
      momentumBudget: false,
      vorticityBudget: false,
    },
    ...change,
  };
}

/** The Corvane setup of numerics.md §12, written out here so that the check does not lean on the preset. */
export function corvaneForCheck(seasonalStrength = 1): Setup {
  const belt = (name: string, latitudeDeg: number): WindComponent => ({
    name,
    pattern: { kind: 'zonalBelt', direction: 'eastward', amplitudeNM2: -0.01, latitudeDeg, widthDeg: 6 },
    season: { mean: 1, switchOnDays: 0, annual: NO_HARMONIC, semiannual: NO_HARMONIC },
  });
  return smallSetup({
    basin: {
      name: 'Corvane',
      geometry: 'equatorial',
      westDeg: 0,
      eastDeg: 60,
      southDeg: -17.5,
      northDeg: 17.5,
      referenceLatitudeDeg: null,
      f0PerS: null,
      betaPerMS: null,
      zonallyPeriodic: false,
      westernCoast: { kind: 'slanting', atSouthDeg: 0, atNorthDeg: 6 },
      islands: [{ kind: 'box', name: '', westDeg: 40.5, eastDeg: 43.5, southDeg: -8, northDeg: -6 }],
      sponges: [],
      coastSpacing: null,
    },
    wind: {
      components: [
        belt('Northern trades', 12),
        belt('Southern trades', -12),
        {
          name: 'Season',
          pattern: {
            kind: 'linearShear',
            stressNM2: 0.03,
            overDistanceKm: 1500,
            fullWithinDeg: 10,
            zeroBeyondDeg: 15,
          },
          season: {
            mean: 0,
            switchOnDays: 0,
            annual: { amplitude: 1, peakDay: 196 },
            semiannual: NO_HARMONIC,
          },
        },
      ],
      seasonalStrength,
      stressFloorM: 0,
    },
    friction: { rayleighPerS: 1e-8, viscosityM2S: 4000, viscosityPatches: [], slip: 'free' },
    numerics: { equations: 'linear', spacingLongitudeDeg: 0.25, spacingLatitudeDeg: 0.25, stepsPerDay: 16 },
    length: { days: 2555 },
    output: {
      sections: [{ name: 'Equator', along: 'latitude', atDeg: 0 }],
      moorings: [],
      frameIntervalDays: 5,
      sectionIntervalDays: 5,
      mooringIntervalDays: 1,
      momentumBudget: false,
      vorticityBudget: false,
    },
  });
}
