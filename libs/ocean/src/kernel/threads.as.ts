// Rows split into bands over threads that share the memory. Each makes what it needs of the rows next to its band
// itself, so that the threads meet once a step; how they meet is share-steps.ts.
import {
  continuity,
  meridional,
  meridionalAhead,
  ringRow,
  spin,
  zonal,
  zonalAhead,
} from './linear.as';
import { cellSums } from './linear-sums.as';
import { firstStage, lastCells, nonlinearStage } from './nonlinear-sweep.as';
import * as P from './places.as';
import { clearPlane } from './rows.as';
import { contextAt, prepare } from './sweep.as';
import { int } from './vector.as';

/** One step of rows `first` to `end` − 1. */
function linearBand(head: usize, c: usize, first: i32, end: i32, ny: i32): void {
  const sums = int(c, P.C_SUMS);
  if (first == 0) {
    clearPlane(ringRow(c, -1) + P.UT);
    clearPlane(ringRow(c, 0) + P.VT);
  } else {
    meridionalAhead(head, c, first - 1);
    continuity(head, c, first - 1, c + P.C_SCRATCH);
  }
  for (let j = first; j < end; j++) {
    continuity(head, c, j, int(c, P.C_NEXT) + <usize>(j + 1) * P.RECORD);
    if (sums) cellSums(head, c, j);
    spin(head, c, j);
    if (j > 0) meridional(head, c, j);
    if (j > first) zonal(head, c, j - 1);
  }
  if (end == ny) clearPlane(ringRow(c, ny) + P.UT);
  else zonalAhead(head, c, end);
  spin(head, c, end);
  zonal(head, c, end - 1);
}

/** The share of thread `k` in step `n` of those that the header asks for. */
export function bandStep(head: usize, k: i32, n: i32): void {
  const ny = <i32>int(head, P.NY);
  const bands = int(head, P.BANDS) + 4 * <usize>k;
  const first = <i32>int(bands, 0);
  const end = <i32>int(bands, 4);
  const c = contextAt(head, k);
  prepare(head, c, <i32>int(head, P.PHASE) + n, n);
  if (int(head, P.NONLINEAR) == 0) linearBand(head, c, first, end, ny);
  else {
    if (first <= 3) firstStage(c);
    for (let t = max(0, first - 3); t <= end + 1; t++) nonlinearStage(head, c, t, ny, first, end);
  }
}

/** Sums of a nonlinear step over the cells of the last row of a band, when the next band's new v is there. */
export function bandCells(head: usize, k: i32): void {
  lastCells(head, contextAt(head, k), <i32>int(int(head, P.BANDS) + 4 * <usize>k, 4));
}
