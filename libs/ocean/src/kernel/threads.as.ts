// Rows split into bands over threads that share the memory. Each makes what it needs of the rows next to its band
// itself, so that the threads meet once a step.
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

/** A step takes tens of microseconds: a thread looks this often before it lies down. */
const SPINS: i32 = 3000;

function meet(head: usize, threads: i32): void {
  const generation = atomic.load<i32>(head + P.GENERATION);
  if (atomic.add<i32>(head + P.ARRIVED, 1) == threads - 1) {
    atomic.store<i32>(head + P.ARRIVED, 0);
    atomic.add<i32>(head + P.GENERATION, 1);
    atomic.notify(head + P.GENERATION, -1);
  } else awaitChange(head + P.GENERATION, generation);
}

function awaitChange(at: usize, from: i32): void {
  for (let k = 0; k < SPINS; k++) if (atomic.load<i32>(at) != from) return;
  while (atomic.load<i32>(at) == from) atomic.wait<i32>(at, from, -1);
}

/** One step of rows `first` to `end` − 1. */
function bandStep(head: usize, c: usize, first: i32, end: i32, ny: i32): void {
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

/** The share of thread `k` in the steps that the header asks for; returns when every thread has made the last one. */
export function band(head: usize, k: i32): void {
  const steps = <i32>int(head, P.STEPS);
  const phase = <i32>int(head, P.PHASE);
  const ny = <i32>int(head, P.NY);
  const threads = <i32>int(head, P.THREADS);
  const bands = int(head, P.BANDS) + 4 * <usize>k;
  const first = <i32>int(bands, 0);
  const end = <i32>int(bands, 4);
  const c = contextAt(head, k);
  const nonlinear = int(head, P.NONLINEAR) != 0;
  for (let n = 0; n < steps; n++) {
    prepare(head, c, phase + n, n);
    if (nonlinear) {
      if (first <= 3) firstStage(c);
      for (let t = max(0, first - 3); t <= end + 1; t++) nonlinearStage(head, c, t, ny, first, end);
    } else bandStep(head, c, first, end, ny);
    meet(head, threads);
    // The v north of a band is the next band's: it is there now. Others read no sums before all have met again, and
    // write neither level that these are made of.
    if (nonlinear) lastCells(head, c, end);
  }
  if (nonlinear && int(head, P.RECORDING) != 0) meet(head, threads);
}

/** Tells the helpers that the header asks for steps. */
export function call(head: usize): void {
  atomic.add<i32>(head + P.COMMAND, 1);
  atomic.notify(head + P.COMMAND, -1);
}

/** The life of helper thread k: makes its share whenever it is called, until it is called with 0 steps. */
export function serve(head: usize, k: i32): void {
  let seen = 0;
  atomic.add<i32>(head + P.READY, 1);
  atomic.notify(head + P.READY, -1);
  for (;;) {
    awaitChange(head + P.COMMAND, seen);
    seen += 1;
    if (int(head, P.STEPS) == 0) return;
    band(head, k);
  }
}
