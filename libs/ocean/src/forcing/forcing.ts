import { padded, paddedLength, type Grid } from '../grid/grid';
import { variesZonally, evaluatePattern } from './pattern';
import { DAYS_PER_YEAR, harmonic, ramp } from './season';
import type { Setup } from '../setup';

/**
 * One fixed distribution of stress; the wind at a moment is the sum of all of them, each times its factor. What does
 * not depend on longitude is kept as one number a row; the rest as padded fields. N/m²; null where there is none.
 */
export interface ForcingBasis {
  /** [ny], at u rows. */
  tauxRow: Float64Array | null;
  /** [ny + 1], at v rows. */
  tauyRow: Float64Array | null;
  /** Padded, at u points. */
  tauxField: Float64Array | null;
  /** Padded, at v points. */
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
 * so years repeat exactly. Throws RangeError naming the component whose stress is not finite.
 */
export function windForcing(setup: Pick<Setup, 'wind' | 'constants' | 'numerics'>, grid: Grid): Forcing {
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
  setup.wind.components.forEach((component, index) => {
    const { season } = component;
    const parts: [number, TimeFunction][] = [
      [season.mean, switchOn(season.switchOnDays)],
      [strength * season.annual.amplitude, yearly(season.annual.peakDay, 1)],
      [strength * season.semiannual.amplitude, yearly(season.semiannual.peakDay, 2)],
    ];
    for (const [amplitude, fn] of parts) {
      if (!Number.isFinite(amplitude)) refuseComponent(component.name, index, amplitude);
      if (amplitude !== 0) addPattern(setup, grid, index, amplitude, baseOf(fn));
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
): void {
  const { pattern, name } = setup.wind.components[index];
  const radius = setup.constants.earthRadiusM;
  const check = (stress: number) => {
    if (!Number.isFinite(stress)) refuseComponent(name, index, stress);
    return stress;
  };
  const { nx, ny } = grid;
  if (!variesZonally(pattern)) {
    const rowsX = (basis.tauxRow ??= new Float64Array(ny));
    const rowsY = (basis.tauyRow ??= new Float64Array(ny + 1));
    for (let j = 0; j < ny; j++)
      rowsX[j] += amplitude * check(evaluatePattern(pattern, grid.lonFace[0], grid.latCentre[j], radius).taux);
    for (let j = 0; j <= ny; j++)
      rowsY[j] += amplitude * check(evaluatePattern(pattern, grid.lonCentre[0], grid.latFace[j], radius).tauy);
    if (rowsX.every((value) => value === 0)) basis.tauxRow = null;
    if (rowsY.every((value) => value === 0)) basis.tauyRow = null;
    return;
  }
  const eastward = pattern.kind === 'gaussianPatch' && pattern.direction === 'eastward';
  if (eastward) {
    const field = (basis.tauxField ??= new Float64Array(paddedLength(grid)));
    for (let j = 0; j < ny; j++)
      for (let i = 0; i <= nx; i++)
        field[padded(grid, i, j)] +=
          amplitude * check(evaluatePattern(pattern, grid.lonFace[i], grid.latCentre[j], radius).taux);
    return;
  }
  const field = (basis.tauyField ??= new Float64Array(paddedLength(grid)));
  for (let j = 0; j <= ny; j++)
    for (let i = 0; i < nx; i++)
      field[padded(grid, i, j)] +=
        amplitude * check(evaluatePattern(pattern, grid.lonCentre[i], grid.latFace[j], radius).tauy);
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
  const bases = parts.map(({ taux, tauy }): ForcingBasis => {
    const basis: ForcingBasis = { tauxRow: null, tauyRow: null, tauxField: null, tauyField: null };
    if (taux) {
      const field = (basis.tauxField = new Float64Array(paddedLength(grid)));
      for (let j = 0; j < grid.ny; j++)
        for (let i = 0; i <= grid.nx; i++) field[padded(grid, i, j)] = taux(grid.xFace[i], grid.yCentre[j]);
    }
    if (tauy) {
      const field = (basis.tauyField = new Float64Array(paddedLength(grid)));
      for (let j = 0; j <= grid.ny; j++)
        for (let i = 0; i < grid.nx; i++) field[padded(grid, i, j)] = tauy(grid.xCentre[i], grid.yFace[j]);
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
