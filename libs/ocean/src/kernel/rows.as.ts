// What the rows of both equations have in common.
import * as P from './places.as';
import { add, int, mul, num, splat } from './vector.as';

// @ts-ignore: decorator
@inline
export function ringRowOf(c: usize, j: i32, length: usize): usize {
  return c + P.C_RING + <usize>((j + 4) & 3) * length;
}

// @ts-ignore: decorator
@inline
export function record(level: usize, j: i32): usize {
  return level + <usize>(j + 1) * P.RECORD;
}

// @ts-ignore: decorator
@inline
export function tableRow(head: usize, j: i32): usize {
  return int(head, P.ROWS) + <usize>j * P.ROW;
}

export function clearPlane(row: usize): void {
  memory.fill(row, 0, P.PLANE);
}

/** Periodic copies of the last and the first column into the halo. */
export function wrap(head: usize, row: usize): void {
  const east = row + int(head, P.EAST);
  store<f64>(row + P.WEST - 8, load<f64>(east - 8));
  store<f64>(east, load<f64>(row + P.WEST));
}

/** The part of the stress of row j that is one number: Σ factor × row value over the bases, times 1/(ρ0 H). */
export function uniformStress(head: usize, c: usize, j: i32, meridional: usize): f64 {
  let table = int(head, P.BASIS_TABLE) + 4 * meridional;
  let factor = int(c, P.C_FACTORS);
  let sum: f64 = 0;
  for (let b = int(head, P.BASES); b > 0; b--) {
    const row = int(table, 0);
    if (row) sum += load<f64>(factor) * load<f64>(row + 8 * <usize>j);
    table += 16;
    factor += 8;
  }
  return sum * num(head, P.PER_MASS);
}

/** Writes the stress of row j along the row: the uniform part, then each field in order. */
export function stressRow(head: usize, c: usize, j: i32, meridional: usize, uniform: f64, t: usize, runs: usize): void {
  const row = c + P.C_STRESS;
  const perMass = num(head, P.PER_MASS);
  const base = splat(uniform);
  const stop = int(t, runs + 4);
  for (let s = int(t, runs); s < stop; s += 8) {
    let p = int(s, 0);
    const end = int(s, 4);
    do {
      store<v128>(row + p, base);
      p += 16;
    } while (p < end);
  }
  let table = int(head, P.BASIS_TABLE) + 8 + 4 * meridional;
  let factor = int(c, P.C_FACTORS);
  for (let b = int(head, P.BASES); b > 0; b--) {
    const plane = int(table, 0);
    if (plane) {
      const part = splat(load<f64>(factor) * perMass);
      const field = plane + <usize>j * P.PLANE;
      for (let s = int(t, runs); s < stop; s += 8) {
        let p = int(s, 0);
        const end = int(s, 4);
        do {
          store<v128>(row + p, add(load<v128>(row + p), mul(part, load<v128>(field + p))));
          p += 16;
        } while (p < end);
      }
    }
    table += 16;
    factor += 8;
  }
}

// @ts-ignore: decorator
@inline
export function put(head: usize, c: usize, term: i32, j: i32, value: f64): void {
  store<f64>(int(c, P.C_SUMS) + <usize>term * int(head, P.SUM_ROW) + 8 * <usize>j, value);
}

/** All ones, or ones in lane 0 alone for the last column of a run of odd length. */
// @ts-ignore: decorator
@inline
export function within(p: usize, end: usize): v128 {
  return i64x2.replace_lane(i64x2.splat(-1), 1, select<i64>(0, -1, p + 8 == end));
}
