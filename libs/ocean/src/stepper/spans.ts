import { isWet, padded, type Grid } from '../grid/grid';

/**
 * Runs of neighbouring points of a row on which the equations are stepped, so that the loops have no masks:
 * run k of row j covers padded indices bounds[2k] to bounds[2k + 1] − 1, for k = rowStart[j] … rowStart[j + 1] − 1.
 */
export interface Spans {
  rowStart: Int32Array;
  bounds: Int32Array;
}

/** Water cells, rows 0 … ny − 1. */
export function cellSpans(grid: Grid): Spans {
  return spansOf(grid, grid.ny, (i, j) => isWet(grid, i, j));
}

/** u points between two water cells, rows 0 … ny − 1; on a periodic grid the seam is the point at i = 0. */
export function uSpans(grid: Grid): Spans {
  return spansOf(grid, grid.ny, (i, j) => isWet(grid, i - 1, j) && isWet(grid, i, j));
}

/** v points between two water cells, rows 0 … ny (the walls hold none). */
export function vSpans(grid: Grid): Spans {
  return spansOf(grid, grid.ny + 1, (i, j) => isWet(grid, i, j - 1) && isWet(grid, i, j));
}

function spansOf(grid: Grid, rows: number, inside: (i: number, j: number) => boolean): Spans {
  const rowStart = new Int32Array(rows + 1);
  const bounds: number[] = [];
  for (let j = 0; j < rows; j++) {
    let open = false;
    for (let i = 0; i <= grid.nx; i++) {
      const now = i < grid.nx && inside(i, j);
      if (now !== open) bounds.push(padded(grid, i, j));
      open = now;
    }
    rowStart[j + 1] = bounds.length / 2;
  }
  return { rowStart, bounds: Int32Array.from(bounds) };
}

/** Corners that do not have water on all four sides: column + 1 of each, rows 0 … ny. */
export interface CoastCorners {
  rowStart: Int32Array;
  columns: Int32Array;
}

/** The corners where ζ takes the slip factor, 0 for free slip and 2 for no slip (numerics.md §3). */
export function coastCorners(grid: Grid): CoastCorners {
  const rowStart = new Int32Array(grid.ny + 2);
  const columns: number[] = [];
  for (let j = 0; j <= grid.ny; j++) {
    for (let i = 0; i <= grid.nx; i++) {
      const open = isWet(grid, i - 1, j - 1) && isWet(grid, i, j - 1) && isWet(grid, i - 1, j) && isWet(grid, i, j);
      if (!open) columns.push(i + 1);
    }
    rowStart[j + 1] = columns.length;
  }
  return { rowStart, columns: Int32Array.from(columns) };
}
