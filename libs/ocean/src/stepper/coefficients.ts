import type { Grid } from '../grid/grid';

// Generalised forward-backward weights after Shchepetkin & McWilliams (2005); the limits that they give are
// re-derived and measured in numerics.md §5.
/** Extrapolation to n + ½ of everything but the pressure. */
export const E0 = 1.781105;
export const E1 = -1.06221;
export const E2 = 0.281105;
/** Weights of the pressure: new, present, previous, one before. */
export const P1 = 0.614;
export const P0 = 0.285;
export const PM1 = 0.088;
export const PM2 = 0.013;

/** Metric and rotation factors of each row, [ny + 1] each, so that the loops multiply only. */
export interface RowFactors {
  /** 1/dx at u rows and at v rows. */
  perDxC: Float64Array;
  perDxV: Float64Array;
  /** Divergence: weight of v (or v h_v) at the north and the south face of cell row j. */
  divNorth: Float64Array;
  divSouth: Float64Array;
  /** Vorticity at corner row j: weight of u in the row north and south of it. */
  curlNorth: Float64Array;
  curlSouth: Float64Array;
  /** Linear Coriolis at u row j: weight of the two v south and the two v north of it (f dxV / 4 dxC). */
  coriolisSouth: Float64Array;
  coriolisNorth: Float64Array;
  /** Linear Coriolis at v row j: f / 4. */
  coriolisV: Float64Array;
  /**
   * Nonlinear: dxV / 4 dxC at the south and the north of row j: weights of q V in the turning force on u, and of v² in
   * the kinetic energy of a cell (A_v / 4 A_c).
   */
  turnSouth: Float64Array;
  turnNorth: Float64Array;
  /** h_v and h_q at row j: area share of the cell rows south and north of it, A_c / A_v. */
  shareSouth: Float64Array;
  shareNorth: Float64Array;
}
export const ROW_FACTORS = [
  'perDxC',
  'perDxV',
  'divNorth',
  'divSouth',
  'curlNorth',
  'curlSouth',
  'coriolisSouth',
  'coriolisNorth',
  'coriolisV',
  'turnSouth',
  'turnNorth',
  'shareSouth',
  'shareNorth',
] as const satisfies readonly (keyof RowFactors)[];

/** Row factors of a grid: Sadourny's (1975) energy-conserving form with q = f/H or (f + ζ)/h_q, see numerics.md §3. */
export function rowFactors(grid: Grid): RowFactors {
  const { ny, dxC, dxV, dy, f } = grid;
  const rows = (length: number, at: (j: number) => number) => {
    const values = new Float64Array(ny + 1);
    for (let j = 0; j < length; j++) values[j] = at(j);
    return values;
  };
  // Outside the walls u is 0, so any finite spacing does there.
  const dxOf = (j: number) => dxC[Math.min(Math.max(j, 0), ny - 1)];
  return {
    perDxC: rows(ny, (j) => 1 / dxC[j]),
    perDxV: rows(ny + 1, (j) => 1 / dxV[j]),
    divNorth: rows(ny, (j) => dxV[j + 1] / (dxC[j] * dy)),
    divSouth: rows(ny, (j) => dxV[j] / (dxC[j] * dy)),
    curlNorth: rows(ny + 1, (j) => dxOf(j) / (dxV[j] * dy)),
    curlSouth: rows(ny + 1, (j) => dxOf(j - 1) / (dxV[j] * dy)),
    coriolisSouth: rows(ny, (j) => (0.25 * f[j] * dxV[j]) / dxC[j]),
    coriolisNorth: rows(ny, (j) => (0.25 * f[j + 1] * dxV[j + 1]) / dxC[j]),
    coriolisV: rows(ny + 1, (j) => 0.25 * f[j]),
    turnSouth: rows(ny, (j) => (0.25 * dxV[j]) / dxC[j]),
    turnNorth: rows(ny, (j) => (0.25 * dxV[j + 1]) / dxC[j]),
    shareSouth: rows(ny + 1, (j) => dxOf(j - 1) / dxV[j]),
    shareNorth: rows(ny + 1, (j) => dxOf(j) / dxV[j]),
  };
}
