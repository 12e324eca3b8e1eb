import type { Grid } from '../grid/grid';
import { variesZonally, evaluatePattern } from './pattern';
import { DAYS_PER_YEAR, harmonic, ramp } from './season';
import { windTaper, type WindTaper } from './sponges';
import type { Setup, WindPattern } from '../setup';

/**
 * One fixed distribution of stress; the wind at a moment is the sum of all of them, each times its factor. What does
 * not depend on longitude is kept as one number a row; the rest as fields. N/m²; null where there is none.
 */
export interface ForcingBasis {
  /** [ny], at u rows. */
  tauxRow: Float64Array | null;
  /** [ny + 1], at v rows. */
  tauyRow: Float64Array | null;
  /** [ny][nx + 1], at u points. */
  tauxField: Float64Array | null;
  /** [ny + 1][nx], at v points. */
  tauyField: Float64Array | null;
}

/** Wind of a model: bases and the factors that they take. */
export interface Forcing {
  bases: ForcingBasis[];
  /** Writes the factor of each basis half-way through step `step` (from `step` to `step` + 1, absolute count). */
  factors: (step: number, out: Float64Array) => void;
}

/** A factor of time that several components share. */
interface TimeFunction {
  key: string;
  /** Factor from year fraction in [0, 1) and model day. */
  at: (yearFraction: number, day: number) => number;
}

/**
 * Forcing of a setup on its grid: the components are grouped by distinct time function (steady, each switch-on, each
 * peak day of the annual and of the semiannual harmonic), so that a step costs one factor a group however many
 * components there are. The phase of the season comes from whole steps: ((step mod 365 n) + ½)/(365 n), n steps a day,
 * so years repeat exactly. Inside sponges that taper it the wind falls to 0. Throws RangeError naming the component whose stress is not finite.
 */
export function windForcing(setup: Pick<Setup, 'basin' | 'wind' | 'constants' | 'numerics'>, grid: Grid): Forcing {
  const functions: TimeFunction[] = [];
  const bases: ForcingBasis[] = [];
  const baseOf = (fn: TimeFunction): ForcingBasis => {
    const known = functions.findIndex((other) => other.key === fn.key);
    if (known >= 0) return bases[known];
    functions.push(fn);
    bases.push({ tauxRow: null, tauyRow: null, tauxField: null, tauyField: null });
    return bases[bases.length - 1];
  };
  const strength = setup.wind.seasonalStrength;
  const taper = windTaper(setup.basin);
  setup.wind.components.forEach((component, index) => {
    const { season } = component;
    const parts: [number, TimeFunction][] = [
      [season.mean, switchOn(season.switchOnDays)],
      [strength * season.annual.amplitude, yearly(season.annual.peakDay, 1)],
      [strength * season.semiannual.amplitude, yearly(season.semiannual.peakDay, 2)],
    ];
    for (const [amplitude, fn] of parts) {
      if (!Number.isFinite(amplitude)) refuseComponent(component.name, index, amplitude);
      if (amplitude !== 0) addPattern(setup, grid, index, amplitude, baseOf(fn), taper);
    }
  });
  const n = setup.numerics.stepsPerDay;
  const stepsPerYear = DAYS_PER_YEAR * n;
  return {
    bases,
    factors: (step, out) => {
      const fraction = ((step % stepsPerYear) + 0.5) / stepsPerYear;
      const day = (step + 0.5) / n;
      for (let k = 0; k < functions.length; k++) out[k] = functions[k].at(fraction, day);
    },
  };
}

function switchOn(days: number): TimeFunction {
  if (days === 0) return { key: 'steady', at: () => 1 };
  return { key: `ramp ${days}`, at: (_fraction, day) => ramp(day, days) };
}

function yearly(peakDay: number, k: 1 | 2): TimeFunction {
  return { key: `${k} a year, ${peakDay}`, at: (fraction) => harmonic(fraction, peakDay, k) };
}

function addPattern(
  setup: Pick<Setup, 'wind' | 'constants'>,
  grid: Grid,
  index: number,
  amplitude: number,
  basis: ForcingBasis,
  taper: WindTaper | null,
): void {
  const { pattern, name } = setup.wind.components[index];
  const radius = setup.constants.earthRadiusM;
  const at = (longitude: number, latitude: number, component: 'taux' | 'tauy') => {
    const stress = evaluatePattern(pattern, longitude, latitude, radius)[component];
    if (!Number.isFinite(stress)) refuseComponent(name, index, stress);
    return amplitude * (taper ? taper.at(longitude, latitude) * stress : stress);
  };
  const { nx, ny, lonFace, lonCentre, latFace, latCentre } = grid;
  if (!variesZonally(pattern) && !taper?.variesZonally) {
    const rowsX = (basis.tauxRow ??= new Float64Array(ny));
    const rowsY = (basis.tauyRow ??= new Float64Array(ny + 1));
    for (let j = 0; j < ny; j++) rowsX[j] += at(lonFace[0], latCentre[j], 'taux');
    for (let j = 0; j <= ny; j++) rowsY[j] += at(lonCentre[0], latFace[j], 'tauy');
    if (rowsX.every((value) => value === 0)) basis.tauxRow = null;
    if (rowsY.every((value) => value === 0)) basis.tauyRow = null;
    return;
  }
  const { eastward, northward } = directionsOf(pattern);
  if (eastward) {
    const field = (basis.tauxField ??= new Float64Array(ny * (nx + 1)));
    for (let j = 0, k = 0; j < ny; j++)
      for (let i = 0; i <= nx; i++) field[k++] += at(lonFace[i], latCentre[j], 'taux');
  }
  if (northward) {
    const field = (basis.tauyField ??= new Float64Array((ny + 1) * nx));
    for (let j = 0, k = 0; j <= ny; j++)
      for (let i = 0; i < nx; i++) field[k++] += at(lonCentre[i], latFace[j], 'tauy');
  }
}

/** Which components a pattern has. */
function directionsOf(pattern: WindPattern): { eastward: boolean; northward: boolean } {
  if (pattern.kind === 'linearShear') return { eastward: true, northward: false };
  if (pattern.kind === 'uniform') return { eastward: pattern.eastwardNM2 !== 0, northward: pattern.northwardNM2 !== 0 };
  const eastward = pattern.direction === 'eastward';
  return { eastward, northward: !eastward };
}

function refuseComponent(name: string, index: number, value: number): never {
  throw new RangeError(
    `Wind component ${index + 1}${name ? ` (“${name}”)` : ''} gives a stress of ${value}; every stress must be a finite number. Check its amplitude and widths.`,
  );
}

/** No wind at all. */
export const CALM: Forcing = { bases: [], factors: () => undefined };

/**
 * Forcing from formulas, for analytic cases: each part gives stress in N/m² at (x, y) in metres, and a factor of the
 * absolute step. Parts that do not depend on x are still kept as fields.
 */
export function forcingFromFunctions(
  grid: Grid,
  parts: {
    taux?: (x: number, y: number) => number;
    tauy?: (x: number, y: number) => number;
    factor?: (step: number) => number;
  }[],
): Forcing {
  const { nx, ny } = grid;
  const bases = parts.map(({ taux, tauy }): ForcingBasis => {
    const basis: ForcingBasis = { tauxRow: null, tauyRow: null, tauxField: null, tauyField: null };
    if (taux) {
      const field = (basis.tauxField = new Float64Array(ny * (nx + 1)));
      for (let j = 0; j < ny; j++)
        for (let i = 0; i <= nx; i++) field[j * (nx + 1) + i] = taux(grid.xFace[i], grid.yCentre[j]);
    }
    if (tauy) {
      const field = (basis.tauyField = new Float64Array((ny + 1) * nx));
      for (let j = 0; j <= ny; j++)
        for (let i = 0; i < nx; i++) field[j * nx + i] = tauy(grid.xCentre[i], grid.yFace[j]);
    }
    return basis;
  });
  return {
    bases,
    factors: (step, out) => {
      for (let k = 0; k < parts.length; k++) out[k] = parts[k].factor?.(step) ?? 1;
    },
  };
}
