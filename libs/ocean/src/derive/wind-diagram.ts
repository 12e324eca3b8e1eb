import { evaluatePattern } from '../forcing/pattern';
import { DAYS_PER_YEAR, seasonFactor } from '../forcing/season';
import { planeOf } from '../grid/build-grid';
import type { Setup } from '../setup';

/** The wind of a setup by latitude and season along one meridian; every field is [latitude][day], row-major. */
export interface WindDiagram {
  longitudeDeg: number;
  /** South to north, both edges included, degrees. */
  latitudeDeg: Float64Array;
  /** Middle of each of the equal parts of the model year, days. */
  dayOfYear: Float64Array;
  /** Eastward and northward stress, N/m². */
  taux: Float64Array;
  tauy: Float64Array;
  /** ∂x τy − ∂y τx, N/m³. */
  curl: Float64Array;
  /** [∂x(τy/f) − ∂y(τx/f)]/ρ0, m/s, upward positive; NaN within L_eq = √(c/β) of the equator. */
  ekmanPumping: Float64Array;
  /** L_eq in degrees of latitude where the basin comes that near to the equator, else null. */
  undefinedWithinDeg: number | null;
}

/** Half the distance over which slopes are taken, degrees: far below any width of a pattern, far above round-off. */
const HALF_STEP_DEG = 0.002;

/**
 * The wind for a diagram of latitude and season, after all switch-ons, along `longitudeDeg` (the middle of the basin
 * when left out). Slopes are central differences of the formulas over 0.004°, so they do not depend on the grid.
 * rows, days: size of the diagram. Throws RangeError when either is not a whole number of at least 2.
 */
export function windDiagram(
  setup: Pick<Setup, 'basin' | 'constants' | 'layer' | 'wind'>,
  options: { longitudeDeg?: number; rows?: number; days?: number } = {},
): WindDiagram {
  const { basin, constants, layer, wind } = setup;
  const { longitudeDeg = (basin.westDeg + basin.eastDeg) / 2, rows = 97, days = 73 } = options;
  for (const [name, count] of Object.entries({ rows, days }))
    if (!Number.isInteger(count) || count < 2)
      throw new RangeError(`A wind diagram has two or more whole ${name}; ${count} arrived.`);
  const dLatitude = (basin.northDeg - basin.southDeg) / (rows - 1);
  const latitudeDeg = Float64Array.from({ length: rows }, (_, j) => basin.southDeg + j * dLatitude);
  const dayOfYear = Float64Array.from({ length: days }, (_, k) => ((k + 0.5) * DAYS_PER_YEAR) / days);
  // Ten years of switch-on are the longest; whole years later the season has the same phase.
  const settled = 11 * DAYS_PER_YEAR;
  const factors = wind.components.map(({ season }) =>
    dayOfYear.map((day) => seasonFactor(season, settled + day, wind.seasonalStrength)),
  );

  const plane = planeOf(setup);
  const metresPerDegree = (constants.earthRadiusM * Math.PI) / 180;
  const dy = 2 * HALF_STEP_DEG * metresPerDegree;
  const dx = dy * plane.cosReference;
  const coriolis = (latitude: number) => plane.f0 + plane.beta * (latitude - plane.referenceDeg) * metresPerDegree;
  const waveSpeed = Math.sqrt(layer.reducedGravityMS2 * layer.restThicknessM);
  const trapping = plane.beta > 0 ? Math.sqrt(waveSpeed / plane.beta) : 0;
  const field = () => new Float64Array(rows * days);
  const [taux, tauy, curl, ekmanPumping] = [field(), field(), field(), field()];
  let undefinedRows = 0;
  latitudeDeg.forEach((latitude, j) => {
    const [fSouth, f, fNorth] = [latitude - HALF_STEP_DEG, latitude, latitude + HALF_STEP_DEG].map(coriolis);
    const meaningless = fSouth * fNorth <= 0 || (plane.beta > 0 && Math.abs(f) < plane.beta * trapping);
    if (meaningless) undefinedRows += 1;
    wind.components.forEach(({ pattern }, component) => {
      const at = (east: number, north: number) =>
        evaluatePattern(
          pattern,
          longitudeDeg + east * HALF_STEP_DEG,
          latitude + north * HALF_STEP_DEG,
          constants.earthRadiusM,
        );
      const [here, south, north] = [at(0, 0), at(0, -1), at(0, 1)];
      const zonalSlope = (at(1, 0).tauy - at(-1, 0).tauy) / dx;
      const curlHere = zonalSlope - (north.taux - south.taux) / dy;
      const pumpingHere = meaningless
        ? NaN
        : (zonalSlope / f - (north.taux / fNorth - south.taux / fSouth) / dy) / constants.densityKgM3;
      factors[component].forEach((factor, k) => {
        const cell = j * days + k;
        taux[cell] += factor * here.taux;
        tauy[cell] += factor * here.tauy;
        curl[cell] += factor * curlHere;
        ekmanPumping[cell] += factor * pumpingHere;
      });
    });
    if (meaningless) ekmanPumping.fill(NaN, j * days, (j + 1) * days);
  });
  const undefinedWithinDeg = undefinedRows > 0 && plane.beta > 0 ? trapping / metresPerDegree : null;
  return { longitudeDeg, latitudeDeg, dayOfYear, taux, tauy, curl, ekmanPumping, undefinedWithinDeg };
}
