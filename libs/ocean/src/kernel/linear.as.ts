// The linear step, row by row, on pairs of columns: the same expressions in the same order as
// stepper/linear/linear-step.ts, which explains them. Loops are tested at the bottom and every neighbour is a pointer
// plus an immediate: the engine then keeps constants in registers. A run of odd length computes one column behind its
// end; what that would leave on a coast is set back to 0 at once.
import { eastwardSums, meridionalSums, putMeridional, putZonal, zonalSums } from './linear-sums.as';
import { record, ringRowOf, stressRow, tableRow, uniformStress, wrap } from './rows.as';
import * as P from './places.as';
import { add, between, both, div, int, mul, num, splat, sub } from './vector.as';

// @ts-ignore: decorator
@inline
export function ringRow(c: usize, j: i32): usize {
  return ringRowOf(c, j, P.LINEAR_RING);
}

/** Half a step ahead of now, previous and before. */
// @ts-ignore: decorator
@inline
function ahead(now: v128, previous: v128, before: v128, e0: v128, e1: v128, e2: v128): v128 {
  return add(add(mul(e0, now), mul(e1, previous)), mul(e2, before));
}

// @ts-ignore: decorator
@inline
function aheadOne(a: usize, b: usize, d: usize): f64 {
  return P.E0 * load<f64>(a) + P.E1 * load<f64>(b) + P.E2 * load<f64>(d);
}

/** ut of row j alone: the row beyond the northern edge of a band. */
export function zonalAhead(head: usize, c: usize, j: i32): void {
  const t = tableRow(head, j);
  let s = int(t, P.SWEEP_RUNS);
  const stop = int(t, P.SWEEP_RUNS + 4);
  const now = record(int(c, P.C_NOW), j) + P.U;
  const previous = record(int(c, P.C_PREVIOUS), j) + P.U;
  const before = record(int(c, P.C_BEFORE), j) + P.U;
  const row = ringRow(c, j) + P.UT;
  const e0 = splat(P.E0);
  const e1 = splat(P.E1);
  const e2 = splat(P.E2);
  for (; s < stop; s += 8) {
    let p = int(s, 0);
    const end = int(s, 4);
    do {
      store<v128>(row + p, ahead(load<v128>(now + p), load<v128>(previous + p), load<v128>(before + p), e0, e1, e2));
      p += 16;
    } while (p <= end); // one column more: the eastern faces
  }
}

/** vt of row j alone, where row j − 1 sweeps: the row beyond the southern edge of a band. */
export function meridionalAhead(head: usize, c: usize, j: i32): void {
  const t = tableRow(head, j);
  let s = int(t, P.SWEEP_RUNS);
  const stop = int(t, P.SWEEP_RUNS + 4);
  const now = record(int(c, P.C_NOW), j) + P.V;
  const previous = record(int(c, P.C_PREVIOUS), j) + P.V;
  const before = record(int(c, P.C_BEFORE), j) + P.V;
  const row = ringRow(c, j) + P.VT;
  const e0 = splat(P.E0);
  const e1 = splat(P.E1);
  const e2 = splat(P.E2);
  for (; s < stop; s += 8) {
    let p = int(s, 0);
    const end = int(s, 4);
    do {
      store<v128>(row + p, ahead(load<v128>(now + p), load<v128>(previous + p), load<v128>(before + p), e0, e1, e2));
      p += 16;
    } while (p < end);
  }
}

/** (ut, vt) at n + ½, D, η and the pressure of row j; η goes to the record `out`. */
export function continuity(head: usize, c: usize, j: i32, out: usize): void {
  const t = tableRow(head, j);
  let s = int(t, P.SWEEP_RUNS);
  const stop = int(t, P.SWEEP_RUNS + 4);
  if (s == stop) return;
  const now = record(int(c, P.C_NOW), j);
  const previous = record(int(c, P.C_PREVIOUS), j);
  const before = record(int(c, P.C_BEFORE), j);
  const ring = ringRow(c, j);
  const ringNorth = ringRow(c, j + 1);
  for (let f = int(t, P.FRESH_RUNS); f < int(t, P.FRESH_RUNS + 4); f += 8)
    memory.fill(ring + P.VT + int(f, 0), 0, int(f, 4) - int(f, 0));
  const east = int(head, P.EAST);
  const v = P.RECORD + P.V;
  const westHalo = P.WEST - 8;
  store<f64>(
    ringNorth + P.VT + westHalo,
    aheadOne(now + v + westHalo, previous + v + westHalo, before + v + westHalo),
  );
  store<f64>(ringNorth + P.VT + east, aheadOne(now + v + east, previous + v + east, before + v + east));
  const e0 = splat(P.E0);
  const e1 = splat(P.E1);
  const e2 = splat(P.E2);
  const perDx = splat(num(t, P.PER_DX_C));
  const north = splat(num(t, P.DIV_NORTH));
  const south = splat(num(t, P.DIV_SOUTH));
  const keep = splat(num(head, P.KEEP_H));
  const drain = splat(num(head, P.DRAIN));
  const w1 = splat(num(head, P.W1));
  const w0 = splat(num(head, P.W0));
  const wm1 = splat(num(head, P.WM1));
  const wm2 = splat(num(head, P.WM2));
  const A = splat(num(head, P.HEAD_VISCOSITY));
  for (; s < stop; s += 8) {
    const begin = int(s, 0);
    let a = now + begin;
    let b = previous + begin;
    let d = before + begin;
    let n = out + begin;
    let r = ring + begin;
    let q = ringNorth + begin;
    const end = now + int(s, 4);
    let west = ahead(load<v128>(a, P.U), load<v128>(b, P.U), load<v128>(d, P.U), e0, e1, e2);
    store<v128>(r, west, P.UT);
    do {
      const next = ahead(load<v128>(a, P.U + 16), load<v128>(b, P.U + 16), load<v128>(d, P.U + 16), e0, e1, e2);
      store<v128>(r, next, P.UT + 16);
      const vt = ahead(load<v128>(a, P.RECORD + P.V), load<v128>(b, P.RECORD + P.V), load<v128>(d, P.RECORD + P.V), e0, e1, e2);
      store<v128>(q, vt, P.VT);
      const D = add(
        mul(sub(between(west, next), west), perDx),
        sub(mul(vt, north), mul(load<v128>(r, P.VT), south)),
      );
      west = next;
      const eta = load<v128>(a, P.H);
      const etaN = sub(mul(keep, eta), mul(drain, D));
      store<v128>(n, etaN, P.H);
      store<v128>(r, D, P.DIV);
      store<v128>(
        r,
        sub(
          add(
            add(mul(w1, etaN), mul(w0, eta)),
            add(mul(wm1, load<v128>(b, P.H)), mul(wm2, load<v128>(d, P.H))),
          ),
          mul(A, D),
        ),
        P.HEAD,
      );
      a += 16;
      b += 16;
      d += 16;
      n += 16;
      r += 16;
      q += 16;
    } while (a < end);
  }
  if (load<u32>(t + P.SPONGE_ROW) && int(head, P.SPONGE_H)) dampedCells(head, c, j, out);
  if (int(head, P.CELL_A)) viscousHead(head, c, j);
  if (int(head, P.PERIODIC)) {
    wrap(head, out + P.H);
    wrap(head, ring + P.HEAD);
    wrap(head, ring + P.DIV);
  }
}

/** η and pressure again where the damping varies along the row. */
function dampedCells(head: usize, c: usize, j: i32, out: usize): void {
  const t = tableRow(head, j);
  let s = int(t, P.CELL_RUNS);
  const stop = int(t, P.CELL_RUNS + 4);
  const now = record(int(c, P.C_NOW), j);
  const previous = record(int(c, P.C_PREVIOUS), j);
  const before = record(int(c, P.C_BEFORE), j);
  const ring = ringRow(c, j);
  const rate = int(head, P.SPONGE_H) + <usize>j * P.PLANE;
  const w1 = splat(num(head, P.W1));
  const w0 = splat(num(head, P.W0));
  const wm1 = splat(num(head, P.WM1));
  const wm2 = splat(num(head, P.WM2));
  const A = splat(num(head, P.HEAD_VISCOSITY));
  const half = splat(num(head, P.HALF_DT));
  const full = splat(num(head, P.DT_REST));
  const damping = splat(num(head, P.DAMPING));
  const one = splat(1);
  for (; s < stop; s += 8) {
    let p = int(s, 0);
    const end = int(s, 4);
    do {
      const k = mul(half, add(damping, load<v128>(rate + p)));
      const D = load<v128>(ring + p, P.DIV);
      const eta = load<v128>(now + p, P.H);
      const etaN = div(sub(mul(sub(one, k), eta), mul(full, D)), add(one, k));
      store<v128>(out + p, etaN, P.H);
      store<v128>(
        ring + p,
        sub(
          add(
            add(mul(w1, etaN), mul(w0, eta)),
            add(mul(wm1, load<v128>(previous + p, P.H)), mul(wm2, load<v128>(before + p, P.H))),
          ),
          mul(A, D),
        ),
        P.HEAD,
      );
      p += 16;
    } while (p < end);
    if (p > end) store<f64>(out + end, 0, P.H);
  }
}

/** Takes A D from the pressure where A varies. */
function viscousHead(head: usize, c: usize, j: i32): void {
  const t = tableRow(head, j);
  let s = int(t, P.CELL_RUNS);
  const stop = int(t, P.CELL_RUNS + 4);
  const ring = ringRow(c, j);
  const A = int(head, P.CELL_A) + <usize>j * P.PLANE;
  for (; s < stop; s += 8) {
    let p = int(s, 0);
    const end = int(s, 4);
    do {
      store<v128>(
        ring + p,
        sub(load<v128>(ring + p, P.HEAD), mul(load<v128>(A + p), load<v128>(ring + p, P.DIV))),
        P.HEAD,
      );
      p += 16;
    } while (p < end);
  }
}

/** A s ζ at corner row j. */
export function spin(head: usize, c: usize, j: i32): void {
  const t = tableRow(head, j);
  let s = int(t, P.CORNER_RUNS);
  const stop = int(t, P.CORNER_RUNS + 4);
  if (s == stop || !int(head, P.TURNING)) return;
  const ring = ringRow(c, j);
  const ringSouth = ringRow(c, j - 1);
  const perDx = splat(num(t, P.PER_DX_V));
  const north = splat(num(t, P.CURL_NORTH));
  const south = splat(num(t, P.CURL_SOUTH));
  const map = int(head, P.CORNER_A);
  if (map) {
    const A = map + <usize>j * P.PLANE;
    for (; s < stop; s += 8) {
      let p = int(s, 0);
      const end = int(s, 4);
      do {
        const r = ring + p;
        const zeta = sub(
          mul(sub(load<v128>(r, P.VT), load<v128>(r, P.VT - 8)), perDx),
          sub(mul(load<v128>(r, P.UT), north), mul(load<v128>(ringSouth + p, P.UT), south)),
        );
        store<v128>(r, mul(load<v128>(A + p), zeta), P.SPIN);
        p += 16;
      } while (p < end);
    }
  } else {
    const A = splat(num(head, P.VISCOSITY));
    for (; s < stop; s += 8) {
      let r = ring + int(s, 0);
      let q = ringSouth + int(s, 0);
      const end = ring + int(s, 4);
      do {
        const zeta = sub(
          mul(sub(load<v128>(r, P.VT), load<v128>(r, P.VT - 8)), perDx),
          sub(mul(load<v128>(r, P.UT), north), mul(load<v128>(q, P.UT), south)),
        );
        store<v128>(r, mul(A, zeta), P.SPIN);
        r += 16;
        q += 16;
      } while (r < end);
    }
  }
  const slip = num(head, P.SLIP);
  let k = int(t, P.COAST);
  const last = int(t, P.COAST + 4);
  for (; k < last; k += 4) {
    const at = ring + int(k, 0);
    store<f64>(at, load<f64>(at, P.SPIN) * slip, P.SPIN);
  }
}

/** v of row j; with `work` also its row sums, where neither drag nor viscosity varies along the row. */
// @ts-ignore: decorator
@inline
function meridionalRow(head: usize, c: usize, j: i32, t: usize, varies: bool, fields: bool, work: bool): void {
  const stop = int(t, P.V_RUNS + 4);
  const uniform = uniformStress(head, c, j, 1);
  if (fields) stressRow(head, c, j, 1, uniform, t, P.V_RUNS);
  const keep = splat(varies ? 0 : num(head, P.KEEP));
  const push = splat(varies ? 1 : num(head, P.PUSH));
  const turn = splat(num(t, P.CORIOLIS_V));
  const perDx = splat(num(t, P.PER_DX_V));
  const perDy = splat(num(head, P.PER_DY));
  const A = splat(num(head, P.VISCOSITY));
  const half = splat(0.5);
  const ring = ringRow(c, j);
  const ringSouth = ringRow(c, j - 1);
  const now = record(int(c, P.C_NOW), j);
  const next = record(int(c, P.C_NEXT), j);
  const stress = c + P.C_STRESS;
  let S = splat(uniform);
  let wind: f64 = 0;
  let square: f64 = 0;
  let viscous: f64 = 0;
  let kinetic: f64 = 0;
  let flux: f64 = 0;
  for (let s = int(t, P.V_RUNS); s < stop; s += 8) {
    const begin = int(s, 0);
    let r = ring + begin;
    let q = ringSouth + begin;
    let a = now + begin;
    let n = next + begin;
    let w = stress + begin;
    const end = now + int(s, 4);
    let sumW = splat(0);
    let sumS = splat(0);
    let sumV = splat(0);
    let sumK = splat(0);
    let sumF = splat(0);
    let inside = i64x2.splat(-1);
    do {
      if (fields) {
        S = load<v128>(w);
        w += 16;
      }
      const west = add(load<v128>(q, P.UT), load<v128>(r, P.UT));
      const east = add(load<v128>(q, P.UT + 8), load<v128>(r, P.UT + 8));
      const C = mul(turn, add(west, east));
      const G = mul(sub(load<v128>(q, P.HEAD), load<v128>(r, P.HEAD)), perDy);
      const F = mul(sub(load<v128>(r, P.SPIN + 8), load<v128>(r, P.SPIN)), perDx);
      const turned = sub(G, C);
      const old = load<v128>(a, P.V);
      const value = add(mul(keep, old), mul(push, add(add(turned, F), S)));
      store<v128>(n, value, P.V);
      if (work) {
        if (a + 8 == end) inside = i64x2(-1, 0);
        const stretch = mul(sub(mul(A, load<v128>(r, P.DIV)), mul(A, load<v128>(q, P.DIV))), perDy);
        const middle = v128.and(mul(half, add(old, value)), inside);
        sumW = add(sumW, mul(middle, S));
        sumS = add(sumS, mul(middle, middle));
        sumV = add(sumV, mul(middle, add(F, stretch)));
        sumK = add(sumK, mul(middle, sub(turned, stretch)));
        sumF = add(sumF, v128.and(load<v128>(r, P.VT), inside));
      }
      r += 16;
      q += 16;
      a += 16;
      n += 16;
    } while (a < end);
    if (a > end) store<f64>(next + int(s, 4), 0, P.V);
    if (work) {
      wind += both(sumW);
      square += both(sumS);
      viscous += both(sumV);
      kinetic += both(sumK);
      flux += both(sumF);
    }
  }
  if (work) putMeridional(head, c, j, wind, square, 0, viscous, kinetic, flux);
}

function calmMeridional(head: usize, c: usize, j: i32, t: usize, varies: bool): void {
  meridionalRow(head, c, j, t, varies, false, false);
}

function windyMeridional(head: usize, c: usize, j: i32, t: usize, varies: bool): void {
  meridionalRow(head, c, j, t, varies, true, false);
}

function calmMeridionalWork(head: usize, c: usize, j: i32, t: usize): void {
  meridionalRow(head, c, j, t, false, false, true);
}

function windyMeridionalWork(head: usize, c: usize, j: i32, t: usize): void {
  meridionalRow(head, c, j, t, false, true, true);
}

/** v of row j, and its sums when they are asked for. */
export function meridional(head: usize, c: usize, j: i32): void {
  const t = tableRow(head, j);
  const work = int(c, P.C_SUMS) != 0;
  if (int(t, P.V_RUNS) == int(t, P.V_RUNS + 4)) {
    if (work) putMeridional(head, c, j, 0, 0, 0, 0, 0, 0);
    return;
  }
  const varies = int(head, P.SPONGE_V) != 0 && int(t, P.SPONGE_ROW) != 0;
  const fused = work && !varies && int(head, P.CELL_A) == 0;
  if (int(head, P.FIELDS_Y)) {
    if (fused) windyMeridionalWork(head, c, j, t);
    else windyMeridional(head, c, j, t, varies);
  } else {
    if (fused) calmMeridionalWork(head, c, j, t);
    else calmMeridional(head, c, j, t, varies);
  }
  const now = record(int(c, P.C_NOW), j) + P.V;
  const next = record(int(c, P.C_NEXT), j) + P.V;
  if (varies) brake(head, t, P.V_RUNS, int(head, P.SPONGE_V) + <usize>j * P.PLANE, now, next);
  if (int(head, P.PERIODIC)) wrap(head, next);
  if (work && !fused) meridionalSums(head, c, j);
}

/** u of row j; with `work` also its row sums, where neither drag nor viscosity varies along the row. */
// @ts-ignore: decorator
@inline
function zonalRow(head: usize, c: usize, j: i32, t: usize, varies: bool, fields: bool, work: bool): void {
  const stop = int(t, P.U_RUNS + 4);
  const uniform = uniformStress(head, c, j, 0);
  if (fields) stressRow(head, c, j, 0, uniform, t, P.U_RUNS);
  const keep = splat(varies ? 0 : num(head, P.KEEP));
  const push = splat(varies ? 1 : num(head, P.PUSH));
  const turnSouth = splat(num(t, P.CORIOLIS_SOUTH));
  const turnNorth = splat(num(t, P.CORIOLIS_NORTH));
  const perDx = splat(num(t, P.PER_DX_C));
  const perDy = splat(num(head, P.PER_DY));
  const A = splat(num(head, P.VISCOSITY));
  const half = splat(0.5);
  const ring = ringRow(c, j);
  const ringNorth = ringRow(c, j + 1);
  const now = record(int(c, P.C_NOW), j);
  const next = record(int(c, P.C_NEXT), j);
  const stress = c + P.C_STRESS;
  let S = splat(uniform);
  let wind: f64 = 0;
  let square: f64 = 0;
  let viscous: f64 = 0;
  let kinetic: f64 = 0;
  for (let s = int(t, P.U_RUNS); s < stop; s += 8) {
    const begin = int(s, 0);
    let r = ring + begin;
    let q = ringNorth + begin;
    let a = now + begin;
    let n = next + begin;
    let w = stress + begin;
    const end = now + int(s, 4);
    let last = add(mul(turnSouth, load<v128>(r - 16, P.VT)), mul(turnNorth, load<v128>(q - 16, P.VT)));
    let sumW = splat(0);
    let sumS = splat(0);
    let sumV = splat(0);
    let sumK = splat(0);
    let inside = i64x2.splat(-1);
    do {
      if (fields) {
        S = load<v128>(w);
        w += 16;
      }
      const east = add(mul(turnSouth, load<v128>(r, P.VT)), mul(turnNorth, load<v128>(q, P.VT)));
      const C = add(between(last, east), east);
      last = east;
      const G = mul(sub(load<v128>(r, P.HEAD - 8), load<v128>(r, P.HEAD)), perDx);
      const F = mul(sub(load<v128>(r, P.SPIN), load<v128>(q, P.SPIN)), perDy);
      const turned = add(G, C);
      const old = load<v128>(a, P.U);
      const value = add(mul(keep, old), mul(push, add(add(turned, F), S)));
      store<v128>(n, value, P.U);
      if (work) {
        if (a + 8 == end) inside = i64x2(-1, 0);
        const stretch = mul(sub(mul(A, load<v128>(r, P.DIV)), mul(A, load<v128>(r, P.DIV - 8))), perDx);
        const middle = v128.and(mul(half, add(old, value)), inside);
        sumW = add(sumW, mul(middle, S));
        sumS = add(sumS, mul(middle, middle));
        sumV = add(sumV, mul(middle, add(F, stretch)));
        sumK = add(sumK, mul(middle, sub(turned, stretch)));
      }
      r += 16;
      q += 16;
      a += 16;
      n += 16;
    } while (a < end);
    if (a > end) store<f64>(next + int(s, 4), 0, P.U);
    if (work) {
      wind += both(sumW);
      square += both(sumS);
      viscous += both(sumV);
      kinetic += both(sumK);
    }
  }
  if (work) putZonal(head, c, j, wind, square, 0, viscous, kinetic);
}

function calmZonal(head: usize, c: usize, j: i32, t: usize, varies: bool): void {
  zonalRow(head, c, j, t, varies, false, false);
}

function windyZonal(head: usize, c: usize, j: i32, t: usize, varies: bool): void {
  zonalRow(head, c, j, t, varies, true, false);
}

function calmZonalWork(head: usize, c: usize, j: i32, t: usize): void {
  zonalRow(head, c, j, t, false, false, true);
}

function windyZonalWork(head: usize, c: usize, j: i32, t: usize): void {
  zonalRow(head, c, j, t, false, true, true);
}

/** u of row j, and its sums when they are asked for. */
export function zonal(head: usize, c: usize, j: i32): void {
  const t = tableRow(head, j);
  const work = int(c, P.C_SUMS) != 0;
  if (work) eastwardSums(head, c, j);
  if (int(t, P.U_RUNS) == int(t, P.U_RUNS + 4)) {
    if (work) putZonal(head, c, j, 0, 0, 0, 0, 0);
    return;
  }
  const varies = int(head, P.SPONGE_U) != 0 && int(t, P.SPONGE_ROW) != 0;
  const fused = work && !varies && int(head, P.CELL_A) == 0;
  if (int(head, P.FIELDS_X)) {
    if (fused) windyZonalWork(head, c, j, t);
    else windyZonal(head, c, j, t, varies);
  } else {
    if (fused) calmZonalWork(head, c, j, t);
    else calmZonal(head, c, j, t, varies);
  }
  const now = record(int(c, P.C_NOW), j) + P.U;
  const next = record(int(c, P.C_NEXT), j) + P.U;
  if (varies) brake(head, t, P.U_RUNS, int(head, P.SPONGE_U) + <usize>j * P.PLANE, now, next);
  if (int(head, P.PERIODIC)) wrap(head, next);
  if (work && !fused) zonalSums(head, c, j);
}

/** Crank–Nicolson drag where it varies along the row: `next` holds the tendency of everything else. */
function brake(head: usize, t: usize, runs: usize, rate: usize, now: usize, next: usize): void {
  const half = splat(num(head, P.HALF_DT));
  const dt = splat(num(head, P.DT));
  const rayleigh = splat(num(head, P.RAYLEIGH));
  const one = splat(1);
  const stop = int(t, runs + 4);
  for (let s = int(t, runs); s < stop; s += 8) {
    let p = int(s, 0);
    const end = int(s, 4);
    do {
      const k = mul(half, add(rayleigh, load<v128>(rate + p)));
      store<v128>(
        next + p,
        div(add(mul(sub(one, k), load<v128>(now + p)), mul(dt, load<v128>(next + p))), add(one, k)),
      );
      p += 16;
    } while (p < end);
    if (p > end) store<f64>(next + end, 0);
  }
}
