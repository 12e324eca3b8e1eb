import type { Grid } from '../grid/grid';

/** A box of a variable's points: rows j0 ≤ j < j1, columns i0 ≤ i < i1. */
export interface Box {
  j0: number;
  j1: number;
  i0: number;
  i1: number;
}

/** Part of a native field: its values, row-major, over a box. */
export interface Part extends Box {
  data: Float32Array;
}

/** Parts of the native fields that a derived variable reads; null where it needs none. */
export interface NativeParts {
  eta: Part | null;
  u: Part | null;
  v: Part | null;
}

/** Value at (i, j) of a part; 0 where it is land or outside, as the equations have it. */
export function valueOrZero(part: Part, i: number, j: number): number {
  if (j < part.j0 || j >= part.j1 || i < part.i0 || i >= part.i1) return 0;
  const value = part.data[(j - part.j0) * (part.i1 - part.i0) + i - part.i0];
  return Number.isNaN(value) ? 0 : value;
}

/** Column of the cell west of face i, or −1 when there is none. */
export function westOf(grid: Grid, i: number): number {
  return i > 0 ? i - 1 : grid.periodic ? grid.nx - 1 : -1;
}

/** Column of the cell east of face i, or −1 when there is none. */
export function eastOf(grid: Grid, i: number): number {
  return i < grid.nx ? i : grid.periodic ? 0 : -1;
}
