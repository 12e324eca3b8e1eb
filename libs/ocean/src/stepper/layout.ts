import type { Grid } from '../grid/grid';

/** Column of cell 0 in a padded row: even, so that pairs of cells lie on 16-byte lines. */
export const WEST = 2;
/** Planes of a row record. */
export const H_PLANE = 0;
export const U_PLANE = 1;
export const V_PLANE = 2;
export const STATE_PLANES = 3;

/**
 * Padded row lengths for which a compiled kernel exists, in doubles. Each is an odd number of cache lines, so that no
 * two planes of a row meet in the same set of a cache.
 */
export const PITCHES: readonly number[] = [136, 264, 520, 1032, 2056, 4104];

/** What a linear step makes on the way: (ut, vt) at n + ½, D = div(ut, vt), g′p − A D, A s ζ. */
export const LINEAR_RING = { ut: 0, vt: 1, divergence: 2, head: 3, spin: 4 } as const;
/**
 * What a nonlinear step makes on the way: (ut, vt) and the clipped ht at n + ½; the fluxes U = u h_u and V = v h_v, m²/s,
 * from the second half of the sweep on limited; R of each cell; w_e; D = div(ut, vt); O = div(U, V); g′p + K − A D;
 * A s ζ; a = q (V_W + V_E) and b = q (U_S + U_N) at corners; the rate at which drag brakes beside r at u and v points.
 */
export const NONLINEAR_RING = {
  ut: 0,
  vt: 1,
  ht: 2,
  fluxU: 3,
  fluxV: 4,
  limit: 5,
  entrained: 6,
  divergence: 7,
  outflow: 8,
  head: 9,
  spin: 10,
  turnU: 11,
  turnV: 12,
  brakeU: 13,
  brakeV: 14,
} as const;
/** Rows of a ring: row j lives at place (j + 4) & 3. */
export const RING_ROWS = 4;

/**
 * Where everything of a model lies in its one Float64Array, in doubles. Four levels first: a level is (ny + 3) row
 * records of three planes (h, u, v) of `pitch` doubles; record 0 is the halo south of row 0, record j + 1 holds row j,
 * record ny + 1 the v points of the northern wall, record ny + 2 is a pad. Value (plane p, row j, column i) of a level
 * lies at levelOffset + ((j + 1) · 3 + p) · pitch + WEST + i; halo columns are i = −1 and i = nx, everything else in the
 * row stays exactly 0. Then a ring of four records of `ringPlanes` planes.
 */
export interface Layout {
  nx: number;
  ny: number;
  pitch: number;
  /** 3 · pitch. */
  record: number;
  /** Offsets of the four level blocks; which is which level of time: `levelOffset`. */
  levels: readonly [number, number, number, number];
  levelLength: number;
  ring: number;
  ringPlanes: number;
  ringLength: number;
  /** End of levels and ring; static planes and sums follow (`Arena`). */
  length: number;
}

/** A level of time: the newest, the two before it, and the block that the running step writes. */
export type Role = 'now' | 'previous' | 'before' | 'next';
const ROLE_SHIFT: Record<Role, number> = { now: 0, next: 1, before: 2, previous: 3 };

// Blocks start on pages shifted against each other by ten cache lines, so that the same point of four levels does not
// fall into one set of the cache.
const PAGE = 512;
const SHIFT = 80;

/** Smallest compiled pitch that holds nx cells, else an even one whose bytes are no multiple of 4096. */
export function pitchOf(nx: number): number {
  const least = nx + 6;
  const compiled = PITCHES.find((pitch) => pitch >= least);
  if (compiled !== undefined) return compiled;
  const pitch = 8 * Math.ceil(least / 8);
  return pitch % PAGE === 0 ? pitch + 8 : pitch;
}

/** Layout of a model on a grid. */
export function layoutOf(grid: Pick<Grid, 'nx' | 'ny'>, equations: 'linear' | 'nonlinear' = 'linear'): Layout {
  const { nx, ny } = grid;
  const pitch = pitchOf(nx);
  const record = STATE_PLANES * pitch;
  const levelLength = (ny + 3) * record;
  const block = PAGE * Math.ceil(levelLength / PAGE) + SHIFT;
  const ringPlanes = Object.keys(equations === 'linear' ? LINEAR_RING : NONLINEAR_RING).length;
  const ringLength = RING_ROWS * ringPlanes * pitch;
  const ring = 4 * block;
  return {
    nx,
    ny,
    pitch,
    record,
    levels: [0, block, 2 * block, 3 * block],
    levelLength,
    ring,
    ringPlanes,
    ringLength,
    length: ring + 8 * Math.ceil(ringLength / 8),
  };
}

/** Offset of the level block that plays `role` at a phase; the phase grows by one with each completed step. */
export function levelOffset(layout: Layout, phase: number, role: Role): number {
  return layout.levels[(phase + ROLE_SHIFT[role]) & 3];
}

/** Column 0 of a plane of row j of the ring. */
export function ringRow(layout: Layout, plane: number, j: number): number {
  return layout.ring + (((j + RING_ROWS) & 3) * layout.ringPlanes + plane) * layout.pitch;
}

/** Hands out places behind the levels, each on a cache line; the memory is made when the length is known. */
export class Arena {
  length: number;
  constructor(from: number) {
    this.length = from;
  }
  /** Offset of `count` doubles. */
  reserve(count: number): number {
    const offset = this.length;
    this.length += 8 * Math.ceil(count / 8);
    return offset;
  }
}
