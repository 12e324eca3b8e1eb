// How the rows of a nonlinear step, or of a band of its rows, follow each other: stepper/nonlinear/nonlinear-step.ts.
import {
  corners,
  halfLevel,
  limitMeridional,
  limitRow,
  limitZonal,
  meridional,
  meridionalFlux,
  ringRow,
  thickness,
  zonal,
  zonalFlux,
} from './nonlinear.as';
import { cellSums, CLIPPED, LIMITED, meridionalSums, zonalSums } from './nonlinear-sums.as';
import * as P from './places.as';
import { clearPlane, put, record } from './rows.as';
import { int } from './vector.as';

/** Beyond the southern wall there is nothing, and nothing flows through it. */
export function firstStage(c: usize): void {
  const beyond = ringRow(c, -1);
  clearPlane(beyond + P.N_UT);
  clearPlane(beyond + P.N_HT);
  clearPlane(beyond + P.N_FLUX_U);
  const wall = ringRow(c, 0);
  clearPlane(wall + P.N_VT);
  clearPlane(wall + P.N_FLUX_V);
}

function beyondNorth(c: usize, ny: i32): void {
  const beyond = ringRow(c, ny);
  clearPlane(beyond + P.N_UT);
  clearPlane(beyond + P.N_HT);
  clearPlane(beyond + P.N_FLUX_U);
  clearPlane(beyond + P.N_FLUX_V);
}

/**
 * What a step does when it reads row t of the state, of a band of rows `first` to `end` − 1: the band begins at t =
 * max(0, first − 3) and ends at t = end + 1. Rows outside the band are made only as far as the band needs them.
 */
export function nonlinearStage(head: usize, c: usize, t: i32, ny: i32, first: i32, end: i32): void {
  const sums = int(c, P.C_SUMS) != 0;
  if (t < ny) {
    const own = sums && t >= first && t < end;
    const clipped = halfLevel(head, c, t, own);
    if (own) put(head, c, CLIPPED, t, clipped);
    zonalFlux(head, c, t);
    if (t > 0 && t > first - 3) meridionalFlux(head, c, t);
  } else if (t == ny) beyondNorth(c, ny);
  // With the fluxes as they are, before continuity's are limited.
  if (t >= first && t <= end) corners(head, c, t);
  const r = t - 1;
  if (r < 0 || r < first - 2) return;
  if (r < ny && int(head, P.LIMITS) != 0) {
    const own = sums && r >= first && r < end;
    const limited = limitRow(head, c, r, own);
    if (own) put(head, c, LIMITED, r, limited);
    if (r >= first - 1) {
      if (r > 0) limitMeridional(head, c, r);
      limitZonal(head, c, r);
    }
  }
  const j = t - 2;
  if (j < 0 || j < first - 1) return;
  const scratch = c + P.C_SCRATCH;
  thickness(head, c, j, j < first ? scratch : record(int(c, P.C_NEXT), j));
  if (j < first) return;
  if (j > 0) {
    meridional(head, c, j);
    if (sums) meridionalSums(head, c, j, j == first ? scratch : record(int(c, P.C_NEXT), j - 1));
  }
  zonal(head, c, j);
  if (!sums) return;
  zonalSums(head, c, j);
  if (j > first) cellSums(head, c, j - 1);
}

/** Sums over the cells of the last row of a band, when the new v north of them is there. */
export function lastCells(head: usize, c: usize, end: i32): void {
  if (int(c, P.C_SUMS)) cellSums(head, c, end - 1);
}
