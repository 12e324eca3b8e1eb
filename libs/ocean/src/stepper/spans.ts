import { isWet, type Grid } from '../grid/grid';
import { WEST } from './layout';

/**
 * Runs of neighbouring points of a row on which the equations are stepped, so that the loops have no masks:
 * run k of row j covers columns bounds[2k] to bounds[2k + 1] − 1 of a padded row (cell i is column WEST + i), for
 * k = rowStart[j] … rowStart[j + 1] − 1. A dry row has none.
 */
export interface Spans {
  rowStart: Int32Array;
  bounds: Int32Array;
}

/** Every run of points that a model steps. */
export interface ModelSpans {
  /** Water cells, rows 0 … ny − 1. */
  cells: Spans;
  /** u points between two water cells, rows 0 … ny − 1; on a periodic grid the seam is the point at i = 0. */
  uPoints: Spans;
  /** v points between two water cells, rows 0 … ny (the walls hold none). */
  vPoints: Spans;
  /**
   * Cells of row j at which velocities at n + ½ and η are made, rows 0 … ny − 1: the water of rows j − 1, j and j + 1 and
   * one cell around it, so that everything that a neighbour reads is there (0 on land); runs less than 8 columns apart
   * are joined. What lies between is never touched.
   */
  sweep: Spans;
  /**
   * Columns of the sweep of row j + 1 that the sweep of row j leaves out, rows 0 … ny − 1: land whose v at n + ½ on row
   * j + 1 nobody makes, so that the ring would hold that of another row. Sweep row j sets it to 0, dry or not.
   */
  bare: Spans;
  /** Corners of water cells, rows 0 … ny, columns 0 … nx. */
  corners: Spans;
}

const JOIN = 8;

/** The runs of a grid. */
export function spansOf(grid: Grid): ModelSpans {
  const { nx, ny } = grid;
  const wet = (i: number, j: number) => isWet(grid, i, j);
  const wide = (i: number, j: number) => wet(i, j - 1) || wet(i, j) || wet(i, j + 1);
  const sweep = runs(ny, nx, (i, j) => wide(i - 1, j) || wide(i, j) || wide(i + 1, j), JOIN);
  return {
    cells: runs(ny, nx, wet),
    uPoints: runs(ny, nx, (i, j) => wet(i - 1, j) && wet(i, j)),
    vPoints: runs(ny + 1, nx, (i, j) => wet(i, j - 1) && wet(i, j)),
    sweep,
    bare: runs(ny, nx, (i, j) => j + 1 < ny && covers(sweep, j + 1, i) && !covers(sweep, j, i)),
    corners: runs(ny + 1, nx + 1, (i, j) => wet(i - 1, j - 1) || wet(i, j - 1) || wet(i - 1, j) || wet(i, j), JOIN),
  };
}

function runs(rows: number, columns: number, inside: (i: number, j: number) => boolean, join = 1): Spans {
  const rowStart = new Int32Array(rows + 1);
  const bounds: number[] = [];
  for (let j = 0; j < rows; j++) {
    const first = bounds.length;
    let open = false;
    for (let i = 0; i <= columns; i++) {
      const now = i < columns && inside(i, j);
      if (now && !open && bounds.length > first && WEST + i - bounds[bounds.length - 1] < join) bounds.pop();
      else if (now !== open) bounds.push(WEST + i);
      open = now;
    }
    rowStart[j + 1] = bounds.length / 2;
  }
  return { rowStart, bounds: Int32Array.from(bounds) };
}

function covers({ rowStart, bounds }: Spans, j: number, i: number): boolean {
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++)
    if (WEST + i >= bounds[2 * s] && WEST + i < bounds[2 * s + 1]) return true;
  return false;
}

/** True when row j has no runs. */
export function isDry(spans: Spans, j: number): boolean {
  return spans.rowStart[j] === spans.rowStart[j + 1];
}

/** Corners of water cells that do not have water on all four sides: columns of a padded row, rows 0 … ny. */
export interface CoastCorners {
  rowStart: Int32Array;
  columns: Int32Array;
  /** 1 over the number of water cells around each. */
  perWet: Float64Array;
}

/** The corners where ζ takes the slip factor, 0 for free slip and 2 for no slip (numerics.md §3). */
export function coastCorners(grid: Grid): CoastCorners {
  const rowStart = new Int32Array(grid.ny + 2);
  const columns: number[] = [];
  const perWet: number[] = [];
  for (let j = 0; j <= grid.ny; j++) {
    for (let i = 0; i <= grid.nx; i++) {
      const water = [isWet(grid, i - 1, j - 1), isWet(grid, i, j - 1), isWet(grid, i - 1, j), isWet(grid, i, j)];
      const count = water.filter(Boolean).length;
      if (count === 0 || count === 4) continue;
      columns.push(WEST + i);
      perWet.push(1 / count);
    }
    rowStart[j + 1] = columns.length;
  }
  return { rowStart, columns: Int32Array.from(columns), perWet: Float64Array.from(perWet) };
}
