import { DEFAULT_CONSTANTS } from '../limits';
import type { Season, Setup, WindComponent } from '../setup';

/** The same at all times from day 0. */
export const STEADY: Season = {
  mean: 1,
  switchOnDays: 0,
  annual: { amplitude: 0, peakDay: 0 },
  semiannual: { amplitude: 0, peakDay: 0 },
};

/** An annual harmonic alone, with its maximum on `peakDay` (model day of the year). */
export function yearly(peakDay: number): Season {
  return { mean: 0, switchOnDays: 0, annual: { amplitude: 1, peakDay }, semiannual: { amplitude: 0, peakDay: 0 } };
}

/** A steady zonal belt of eastward stress `amplitudeNM2` (N/m²), a Gaussian of `widthDeg` about `latitudeDeg`. */
export function steadyBelt(name: string, amplitudeNM2: number, latitudeDeg: number, widthDeg: number): WindComponent {
  return {
    name,
    pattern: { kind: 'zonalBelt', direction: 'eastward', amplitudeNM2, latitudeDeg, widthDeg },
    season: structuredClone(STEADY),
  };
}

/** Day of the peak of the Halcyon wind: model day 196.0 is 16 July, 00:00. */
const HALCYON_PEAK_DAY = 196;

/**
 * The Corvane Basin under the Halcyon wind, the control of the demonstration experiment (invented).
 * strength: the seasonal strength s, a factor on the Halcyon shear alone; 1 is the control, 1.2 strong, 0.8 weak.
 * The nonlinear one adds entrainment below 60 m and 20 steps a day. Returns a new object each time.
 */
export function corvaneSetup(strength = 1, equations: Setup['numerics']['equations'] = 'linear'): Setup {
  const nonlinear = equations === 'nonlinear';
  return {
    schemaVersion: 1,
    constants: { ...DEFAULT_CONSTANTS },
    basin: {
      name: 'Corvane Basin',
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
      islands: [{ kind: 'box', name: 'Tern Island', westDeg: 40.5, eastDeg: 43.5, southDeg: -8, northDeg: -6 }],
      sponges: [],
      coastSpacing: null,
    },
    layer: {
      reducedGravityMS2: 0.03,
      restThicknessM: 200,
      dampingPerS: 0,
      temperatureStepK: 15,
      minimumThicknessM: 20,
      entrainment: nonlinear ? { onsetThicknessM: 60, timescaleDays: 10, detrainment: 'none' } : null,
    },
    wind: {
      components: [
        steadyBelt('Northern belt', -0.01, 12, 6),
        steadyBelt('Southern belt', -0.01, -12, 6),
        {
          name: 'Halcyon shear',
          pattern: {
            kind: 'linearShear',
            stressNM2: 0.03,
            overDistanceKm: 1500,
            fullWithinDeg: 10,
            zeroBeyondDeg: 15,
          },
          season: yearly(HALCYON_PEAK_DAY),
        },
      ],
      seasonalStrength: strength,
      stressFloorM: 0,
    },
    start: { kind: 'rest' },
    friction: { rayleighPerS: 1e-8, viscosityM2S: 4000, viscosityPatches: [], slip: 'free' },
    numerics: {
      equations,
      spacingLongitudeDeg: 0.25,
      spacingLatitudeDeg: 0.25,
      stepsPerDay: nonlinear ? 20 : 16,
    },
    length: { days: 2555 },
    output: {
      sections: [
        { name: 'N 10', along: 'latitude', atDeg: 10 },
        { name: 'Equator', along: 'latitude', atDeg: 0 },
        { name: 'S 10', along: 'latitude', atDeg: -10 },
        { name: 'Meridian 30', along: 'longitude', atDeg: 30 },
      ],
      moorings: [
        { name: 'West', longitudeDeg: 4.5, latitudeDeg: 0 },
        { name: 'Centre', longitudeDeg: 30, latitudeDeg: 0 },
        { name: 'East', longitudeDeg: 58, latitudeDeg: 0 },
        { name: 'North', longitudeDeg: 20, latitudeDeg: 12 },
        { name: 'Lee', longitudeDeg: 39, latitudeDeg: -7 },
      ],
      frameIntervalDays: 5,
      sectionIntervalDays: 1,
      mooringIntervalDays: 0.5,
      momentumBudget: false,
      vorticityBudget: false,
    },
  };
}

/**
 * A member of the demonstration's family along the seasonal strength: the nonlinear Corvane setup on cells of half a
 * degree, four times fewer, with the viscosity that gives their Munk layer two cells. Returns a new object each time.
 */
export function corvaneFamilySetup(strength = 1): Setup {
  const setup = corvaneSetup(strength, 'nonlinear');
  return {
    ...setup,
    friction: { ...setup.friction, viscosityM2S: 32_000 },
    numerics: { ...setup.numerics, spacingLongitudeDeg: 0.5, spacingLatitudeDeg: 0.5, stepsPerDay: 16 },
  };
}
