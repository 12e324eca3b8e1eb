// How the rows of a step, of several steps at once, or of a band of rows follow each other.
import { continuity, meridional, ringRow, spin, zonal } from './linear.as';
import { cellSums } from './linear-sums.as';
import { firstStage, lastCells, nonlinearStage } from './nonlinear-sweep.as';
import * as P from './places.as';
import { clearPlane } from './rows.as';
import { int } from './vector.as';

// @ts-ignore: decorator
@inline
export function contextAt(head: usize, k: i32): usize {
  return int(head, P.CONTEXTS) + <usize>k * int(head, P.CONTEXT_STRIDE);
}

/** Makes a context ready for step `index` of this call, made at `phase`. */
export function prepare(head: usize, c: usize, phase: i32, index: i32): void {
  const levels = head + P.LEVELS;
  store<u32>(c + P.C_NOW, int(levels, <usize>(phase & 3) << 2));
  store<u32>(c + P.C_NEXT, int(levels, <usize>((phase + 1) & 3) << 2));
  store<u32>(c + P.C_BEFORE, int(levels, <usize>((phase + 2) & 3) << 2));
  store<u32>(c + P.C_PREVIOUS, int(levels, <usize>((phase + 3) & 3) << 2));
  store<u32>(c + P.C_FACTORS, int(head, P.FACTORS) + 8 * <usize>index * int(head, P.BASES));
  const sums = int(head, P.SUMS) + <usize>index * int(head, P.SUM_STRIDE);
  store<u32>(c + P.C_SUMS, int(head, P.RECORDING) ? sums : 0);
}

/** What a step does at row j: η of row j, ζ and v of row j, u of row j − 1. */
function stage(head: usize, c: usize, j: i32, ny: i32): void {
  const sums = int(c, P.C_SUMS);
  if (j == 0) {
    clearPlane(ringRow(c, -1) + P.UT);
    clearPlane(ringRow(c, 0) + P.VT);
  }
  if (j < ny) {
    continuity(head, c, j, int(c, P.C_NEXT) + <usize>(j + 1) * P.RECORD);
    if (sums) cellSums(head, c, j);
  } else clearPlane(ringRow(c, ny) + P.UT);
  spin(head, c, j);
  if (j > 0) {
    if (j < ny) {
      meridional(head, c, j);
    }
    zonal(head, c, j - 1);
  }
}

/**
 * Makes the steps that the header asks for. BLOCK steps are in flight at once, each LAG rows behind the one before it, so
 * that a row is read and written once for all of them: a step that begins row t needs the one before it complete to row
 * t + 1 in v and to row t in u and h. The linear step leaves these complete when it is at row t + 1, the nonlinear one,
 * which ends two rows behind where it begins, at row t + 3.
 */
export function advance(head: usize): void {
  const steps = <i32>int(head, P.STEPS);
  const block = <i32>int(head, P.BLOCK);
  const phase = <i32>int(head, P.PHASE);
  const ny = <i32>int(head, P.NY);
  const nonlinear = int(head, P.NONLINEAR) != 0;
  const lag = nonlinear ? 3 : 1;
  const last = nonlinear ? ny + 1 : ny;
  for (let done = 0; done < steps; done += block) {
    const some = min(block, steps - done);
    for (let k = 0; k < some; k++) prepare(head, contextAt(head, k), phase + done + k, done + k);
    for (let front = 0; front <= last + lag * (some - 1); front++)
      for (let k = 0; k < some; k++) {
        const j = front - lag * k;
        if (j < 0 || j > last) continue;
        const c = contextAt(head, k);
        if (!nonlinear) stage(head, c, j, ny);
        else {
          if (j == 0) firstStage(c);
          nonlinearStage(head, c, j, ny, 0, ny);
          if (j == last) lastCells(head, c, ny);
        }
      }
  }
}
