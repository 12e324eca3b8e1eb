// The nonlinear step, row by row, on pairs of columns: the same expressions in the same order as stepper/nonlinear, which
// explains them. Where no cell of a row is short of water its limiter is 1 everywhere, and multiplying by it is left out.
import { record, ringRowOf, stressRow, tableRow, uniformStress, wrap } from './rows.as';
import * as P from './places.as';
import { add, div, int, mul, num, splat, sub } from './vector.as';

// @ts-ignore: decorator
@inline
export function ringRow(c: usize, j: i32): usize {
  return ringRowOf(c, j, P.NONLINEAR_RING);
}

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

// The pseudo-maximum and -minimum give the first number where the two are equal or not numbers: with the constant second
// they agree with Math.max and Math.min but for the sign of a zero, which nothing below keeps.
// @ts-ignore: decorator
@inline
function atLeast(a: v128, least: v128): v128 {
  return f64x2.pmax(a, least);
}

// @ts-ignore: decorator
@inline
function atMost(a: v128, most: v128): v128 {
  return f64x2.pmin(a, most);
}

/** (ut, ht) of row j and vt of row j + 1 at n + ½; ht clipped; w_e. Answers how many cells were clipped, if `count`. */
export function halfLevel(head: usize, c: usize, j: i32, count: bool): i32 {
  const t = tableRow(head, j);
  let s = int(t, P.SWEEP_RUNS);
  const stop = int(t, P.SWEEP_RUNS + 4);
  if (s == stop) return 0;
  const now = record(int(c, P.C_NOW), j);
  const previous = record(int(c, P.C_PREVIOUS), j);
  const before = record(int(c, P.C_BEFORE), j);
  const ring = ringRow(c, j);
  const ringNorth = ringRow(c, j + 1);
  const east = int(head, P.EAST);
  const v = P.RECORD + P.V;
  const westHalo = P.WEST - 8;
  store<f64>(
    ringNorth + P.N_VT + westHalo,
    aheadOne(now + v + westHalo, previous + v + westHalo, before + v + westHalo),
  );
  const e0 = splat(P.E0);
  const e1 = splat(P.E1);
  const e2 = splat(P.E2);
  for (; s < stop; s += 8) {
    const begin = int(s, 0);
    let a = now + begin;
    let b = previous + begin;
    let d = before + begin;
    let r = ring + begin;
    let q = ringNorth + begin;
    const end = now + int(s, 4);
    do {
      store<v128>(
        r,
        ahead(load<v128>(a, P.U), load<v128>(b, P.U), load<v128>(d, P.U), e0, e1, e2),
        P.N_UT,
      );
      store<v128>(
        q,
        ahead(
          load<v128>(a, P.RECORD + P.V),
          load<v128>(b, P.RECORD + P.V),
          load<v128>(d, P.RECORD + P.V),
          e0,
          e1,
          e2,
        ),
        P.N_VT,
      );
      store<v128>(
        r,
        ahead(load<v128>(a, P.H), load<v128>(b, P.H), load<v128>(d, P.H), e0, e1, e2),
        P.N_HT,
      );
      a += 16;
      b += 16;
      d += 16;
      r += 16;
      q += 16;
    } while (a <= end); // one column more: the eastern faces
  }
  store<f64>(ringNorth + P.N_VT + east, aheadOne(now + v + east, previous + v + east, before + v + east));
  const clips = int(head, P.LIMITS) != 0;
  const entrains = int(head, P.ENTRAINS) != 0;
  let clipped = 0;
  if (count && clips) clipped = countClipped(head, t, ring);
  if (clips && entrains) clipAndEntrain(head, t, ring);
  else if (clips) clip(head, t, ring);
  else if (entrains) entrain(head, t, ring);
  if (int(head, P.PERIODIC)) {
    wrap(head, ring + P.N_HT);
    if (entrains) wrap(head, ring + P.N_ENTRAINED);
  }
  return clipped;
}

function countClipped(head: usize, t: usize, ring: usize): i32 {
  const least = num(head, P.MINIMUM);
  let clipped = 0;
  const stop = int(t, P.CELL_RUNS + 4);
  for (let s = int(t, P.CELL_RUNS); s < stop; s += 8) {
    const end = int(s, 4);
    for (let p = int(s, 0); p < end; p += 8) if (load<f64>(ring + p, P.N_HT) < least) clipped += 1;
  }
  return clipped;
}

function clip(head: usize, t: usize, ring: usize): void {
  const least = splat(num(head, P.MINIMUM));
  const stop = int(t, P.CELL_RUNS + 4);
  for (let s = int(t, P.CELL_RUNS); s < stop; s += 8) {
    let r = ring + int(s, 0);
    const end = ring + int(s, 4);
    do {
      store<v128>(r, atLeast(load<v128>(r, P.N_HT), least), P.N_HT);
      r += 16;
    } while (r < end);
    if (r > end) store<f64>(end, 0, P.N_HT);
  }
}

function clipAndEntrain(head: usize, t: usize, ring: usize): void {
  const least = splat(num(head, P.MINIMUM));
  const onset = splat(num(head, P.ONSET));
  const per = splat(num(head, P.PER_ONSET));
  const nothing = splat(0);
  const stop = int(t, P.CELL_RUNS + 4);
  for (let s = int(t, P.CELL_RUNS); s < stop; s += 8) {
    let r = ring + int(s, 0);
    const end = ring + int(s, 4);
    do {
      const h = atLeast(load<v128>(r, P.N_HT), least);
      store<v128>(r, h, P.N_HT);
      const lack = atLeast(sub(onset, h), nothing);
      store<v128>(r, mul(mul(lack, lack), per), P.N_ENTRAINED);
      r += 16;
    } while (r < end);
    if (r > end) store<f64>(end, 0, P.N_HT);
  }
}

function entrain(head: usize, t: usize, ring: usize): void {
  const onset = splat(num(head, P.ONSET));
  const per = splat(num(head, P.PER_ONSET));
  const nothing = splat(0);
  const stop = int(t, P.CELL_RUNS + 4);
  for (let s = int(t, P.CELL_RUNS); s < stop; s += 8) {
    let r = ring + int(s, 0);
    const end = ring + int(s, 4);
    do {
      const lack = atLeast(sub(onset, load<v128>(r, P.N_HT)), nothing);
      store<v128>(r, mul(mul(lack, lack), per), P.N_ENTRAINED);
      r += 16;
    } while (r < end);
  }
}

/** U of row j, not limited. */
export function zonalFlux(head: usize, c: usize, j: i32): void {
  const t = tableRow(head, j);
  const ring = ringRow(c, j);
  const half = splat(0.5);
  const stop = int(t, P.SWEEP_RUNS + 4);
  for (let s = int(t, P.SWEEP_RUNS); s < stop; s += 8) {
    let r = ring + int(s, 0);
    const end = ring + int(s, 4);
    do {
      store<v128>(
        r,
        mul(load<v128>(r, P.N_UT), mul(half, add(load<v128>(r, P.N_HT - 8), load<v128>(r, P.N_HT)))),
        P.N_FLUX_U,
      );
      r += 16;
    } while (r <= end);
  }
}

/** V of row j, not limited, at every column that a corner of the row reads. */
export function meridionalFlux(head: usize, c: usize, j: i32): void {
  const t = tableRow(head, j);
  const stop = int(t, P.CORNER_RUNS + 4);
  let s = int(t, P.CORNER_RUNS);
  if (s == stop) return;
  const ring = ringRow(c, j);
  const ringSouth = ringRow(c, j - 1);
  const south = splat(0.5 * num(t, P.SHARE_SOUTH));
  const north = splat(0.5 * num(t, P.SHARE_NORTH));
  for (; s < stop; s += 8) {
    const begin = max(int(s, 0) - 8, P.WEST);
    let r = ring + begin;
    let q = ringSouth + begin;
    const end = ring + min(int(s, 4), int(head, P.EAST));
    do {
      store<v128>(
        r,
        mul(
          load<v128>(r, P.N_VT),
          add(mul(south, load<v128>(q, P.N_HT)), mul(north, load<v128>(r, P.N_HT))),
        ),
        P.N_FLUX_V,
      );
      r += 16;
      q += 16;
    } while (r < end);
  }
  if (int(head, P.PERIODIC)) wrap(head, ring + P.N_FLUX_V);
}

// @ts-ignore: decorator
@inline
function limitedFlag(c: usize, j: i32): usize {
  return c + P.C_LIMITED + 4 * <usize>((j + 4) & 3);
}

/** Finds whether cells of row j are short of water, and then R of all of them. Answers how many, if `count`. */
export function limitRow(head: usize, c: usize, j: i32, count: bool): i32 {
  const t = tableRow(head, j);
  const ring = ringRow(c, j);
  const ringNorth = ringRow(c, j + 1);
  const h = record(int(c, P.C_NOW), j) + P.H;
  const perDx = splat(num(t, P.PER_DX_C));
  const north = splat(num(t, P.DIV_NORTH));
  const south = splat(num(t, P.DIV_SOUTH));
  const perDt = splat(num(head, P.PER_DT));
  const least = splat(num(head, P.MINIMUM));
  const nothing = splat(0);
  let any = splat(0);
  const stop = int(t, P.CELL_RUNS + 4);
  for (let s = int(t, P.CELL_RUNS); s < stop; s += 8) {
    const begin = int(s, 0);
    let r = ring + begin;
    let q = ringNorth + begin;
    let a = h + begin;
    const end = h + int(s, 4);
    do {
      const zonal = mul(
        sub(
          atLeast(load<v128>(r, P.N_FLUX_U + 8), nothing),
          atMost(load<v128>(r, P.N_FLUX_U), nothing),
        ),
        perDx,
      );
      const meridional = sub(
        mul(atLeast(load<v128>(q, P.N_FLUX_V), nothing), north),
        mul(atMost(load<v128>(r, P.N_FLUX_V), nothing), south),
      );
      const supply = mul(atLeast(sub(load<v128>(a), least), nothing), perDt);
      any = v128.or(any, f64x2.gt(add(zonal, meridional), supply));
      r += 16;
      q += 16;
      a += 16;
    } while (a < end);
  }
  const short = v128.any_true(any);
  store<u32>(limitedFlag(c, j), short ? 1 : 0);
  return short ? shareOut(head, c, j, count) : 0;
}

function shareOut(head: usize, c: usize, j: i32, count: bool): i32 {
  const t = tableRow(head, j);
  const ring = ringRow(c, j);
  const ringNorth = ringRow(c, j + 1);
  const h = record(int(c, P.C_NOW), j) + P.H;
  const perDx = splat(num(t, P.PER_DX_C));
  const north = splat(num(t, P.DIV_NORTH));
  const south = splat(num(t, P.DIV_SOUTH));
  const perDt = splat(num(head, P.PER_DT));
  const least = splat(num(head, P.MINIMUM));
  const nothing = splat(0);
  const one = splat(1);
  let limited = 0;
  const stop = int(t, P.CELL_RUNS + 4);
  for (let s = int(t, P.CELL_RUNS); s < stop; s += 8) {
    let p = int(s, 0);
    const end = int(s, 4);
    do {
      const r = ring + p;
      const q = ringNorth + p;
      const zonal = mul(
        sub(
          atLeast(load<v128>(r, P.N_FLUX_U + 8), nothing),
          atMost(load<v128>(r, P.N_FLUX_U), nothing),
        ),
        perDx,
      );
      const meridional = sub(
        mul(atLeast(load<v128>(q, P.N_FLUX_V), nothing), north),
        mul(atMost(load<v128>(r, P.N_FLUX_V), nothing), south),
      );
      const outflow = add(zonal, meridional);
      const supply = mul(atLeast(sub(load<v128>(h + p), least), nothing), perDt);
      const short = f64x2.gt(outflow, supply);
      store<v128>(r, v128.bitselect(div(supply, outflow), one, short), P.N_LIMIT);
      if (count) limited += popcnt<i32>(i64x2.bitmask(short) & (p + 8 == end ? 1 : 3));
      p += 16;
    } while (p < end);
  }
  if (int(head, P.PERIODIC)) wrap(head, ring + P.N_LIMIT);
  return limited;
}

/** Ones for the limiter of a row that needs none, next to a row that does. */
function fillOnes(head: usize, c: usize, j: i32): void {
  const t = tableRow(head, j);
  const ring = ringRow(c, j) + P.N_LIMIT;
  const one = splat(1);
  const stop = int(t, P.CELL_RUNS + 4);
  for (let s = int(t, P.CELL_RUNS); s < stop; s += 8) {
    let p = int(s, 0);
    const end = int(s, 4);
    do {
      store<v128>(ring + p, one);
      p += 16;
    } while (p < end);
  }
  if (int(head, P.PERIODIC)) wrap(head, ring);
}

export function limitMeridional(head: usize, c: usize, j: i32): void {
  const t = tableRow(head, j);
  const stop = int(t, P.V_RUNS + 4);
  let s = int(t, P.V_RUNS);
  const here = load<u32>(limitedFlag(c, j));
  const before = load<u32>(limitedFlag(c, j - 1));
  if (s == stop || (here | before) == 0) return;
  if (!here) fillOnes(head, c, j);
  if (!before) fillOnes(head, c, j - 1);
  const ring = ringRow(c, j);
  const ringSouth = ringRow(c, j - 1);
  const nothing = splat(0);
  for (; s < stop; s += 8) {
    let p = int(s, 0);
    const end = int(s, 4);
    const behind = load<f64>(ring + end, P.N_FLUX_V);
    do {
      const flux = load<v128>(ring + p, P.N_FLUX_V);
      const share = v128.bitselect(
        load<v128>(ringSouth + p, P.N_LIMIT),
        load<v128>(ring + p, P.N_LIMIT),
        f64x2.gt(flux, nothing),
      );
      store<v128>(ring + p, mul(flux, share), P.N_FLUX_V);
      p += 16;
    } while (p < end);
    store<f64>(ring + end, behind, P.N_FLUX_V);
  }
  if (int(head, P.PERIODIC)) wrap(head, ring + P.N_FLUX_V);
}

export function limitZonal(head: usize, c: usize, j: i32): void {
  const t = tableRow(head, j);
  const stop = int(t, P.U_RUNS + 4);
  let s = int(t, P.U_RUNS);
  if (s == stop || !load<u32>(limitedFlag(c, j))) return;
  const ring = ringRow(c, j);
  const nothing = splat(0);
  for (; s < stop; s += 8) {
    let p = int(s, 0);
    const end = int(s, 4);
    const behind = load<f64>(ring + end, P.N_FLUX_U);
    do {
      const flux = load<v128>(ring + p, P.N_FLUX_U);
      const share = v128.bitselect(
        load<v128>(ring + p, P.N_LIMIT - 8),
        load<v128>(ring + p, P.N_LIMIT),
        f64x2.gt(flux, nothing),
      );
      store<v128>(ring + p, mul(flux, share), P.N_FLUX_U);
      p += 16;
    } while (p < end);
    store<f64>(ring + end, behind, P.N_FLUX_U);
  }
  if (int(head, P.PERIODIC))
    store<f64>(ring + int(head, P.EAST), load<f64>(ring + P.WEST, P.N_FLUX_U), P.N_FLUX_U);
}

/** Corner row j: q, its products with the fluxes, A s ζ. */
export function corners(head: usize, c: usize, j: i32): void {
  const t = tableRow(head, j);
  const stop = int(t, P.CORNER_RUNS + 4);
  let s = int(t, P.CORNER_RUNS);
  if (s == stop) return;
  const ring = ringRow(c, j);
  const ringSouth = ringRow(c, j - 1);
  const f = splat(num(t, P.F));
  const perDx = splat(num(t, P.PER_DX_V));
  const curlNorth = splat(num(t, P.CURL_NORTH));
  const curlSouth = splat(num(t, P.CURL_SOUTH));
  const shareSouth = splat(num(t, P.SHARE_SOUTH));
  const shareNorth = splat(num(t, P.SHARE_NORTH));
  const quarter = splat(0.25);
  const map = int(head, P.CORNER_A);
  const viscosity = splat(num(head, P.VISCOSITY));
  for (; s < stop; s += 8) {
    const begin = int(s, 0);
    let r = ring + begin;
    let q = ringSouth + begin;
    const end = ring + int(s, 4);
    do {
      const zeta = sub(
        mul(sub(load<v128>(r, P.N_VT), load<v128>(r, P.N_VT - 8)), perDx),
        sub(mul(load<v128>(r, P.N_UT), curlNorth), mul(load<v128>(q, P.N_UT), curlSouth)),
      );
      const water = add(
        mul(shareSouth, add(load<v128>(q, P.N_HT - 8), load<v128>(q, P.N_HT))),
        mul(shareNorth, add(load<v128>(r, P.N_HT - 8), load<v128>(r, P.N_HT))),
      );
      const vorticity = div(add(f, zeta), mul(quarter, water));
      store<v128>(
        r,
        mul(vorticity, add(load<v128>(r, P.N_FLUX_V - 8), load<v128>(r, P.N_FLUX_V))),
        P.N_TURN_U,
      );
      store<v128>(
        r,
        mul(vorticity, add(load<v128>(q, P.N_FLUX_U), load<v128>(r, P.N_FLUX_U))),
        P.N_TURN_V,
      );
      store<v128>(r, mul(viscosity, zeta), P.N_SPIN);
      r += 16;
      q += 16;
    } while (r < end);
  }
  if (map) mapSpin(head, t, ring, ringSouth, map + <usize>j * P.PLANE);
  const slip = num(head, P.SLIP);
  let perWet = int(t, P.PER_WET);
  let k = int(t, P.COAST);
  const last = int(t, P.COAST + 4);
  for (; k < last; k += 4) {
    const p = int(k, 0);
    const r = ring + p;
    const q = ringSouth + p;
    const raw =
      (load<f64>(r, P.N_VT) - load<f64>(r, P.N_VT - 8)) * num(t, P.PER_DX_V) -
      (load<f64>(r, P.N_UT) * num(t, P.CURL_NORTH) - load<f64>(q, P.N_UT) * num(t, P.CURL_SOUTH));
    const zeta = slip * raw;
    const water =
      num(t, P.SHARE_SOUTH) * (load<f64>(q, P.N_HT - 8) + load<f64>(q, P.N_HT)) +
      num(t, P.SHARE_NORTH) * (load<f64>(r, P.N_HT - 8) + load<f64>(r, P.N_HT));
    const vorticity = (num(t, P.F) + zeta) / (load<f64>(perWet) * water);
    perWet += 8;
    store<f64>(r, vorticity * (load<f64>(r, P.N_FLUX_V - 8) + load<f64>(r, P.N_FLUX_V)), P.N_TURN_U);
    store<f64>(r, vorticity * (load<f64>(q, P.N_FLUX_U) + load<f64>(r, P.N_FLUX_U)), P.N_TURN_V);
    const A = map ? load<f64>(map + <usize>j * P.PLANE + p) : num(head, P.VISCOSITY);
    store<f64>(r, A * zeta, P.N_SPIN);
  }
}

function mapSpin(head: usize, t: usize, ring: usize, ringSouth: usize, A: usize): void {
  const perDx = splat(num(t, P.PER_DX_V));
  const curlNorth = splat(num(t, P.CURL_NORTH));
  const curlSouth = splat(num(t, P.CURL_SOUTH));
  const stop = int(t, P.CORNER_RUNS + 4);
  for (let s = int(t, P.CORNER_RUNS); s < stop; s += 8) {
    let p = int(s, 0);
    const end = int(s, 4);
    do {
      const r = ring + p;
      const zeta = sub(
        mul(sub(load<v128>(r, P.N_VT), load<v128>(r, P.N_VT - 8)), perDx),
        sub(mul(load<v128>(r, P.N_UT), curlNorth), mul(load<v128>(ringSouth + p, P.N_UT), curlSouth)),
      );
      store<v128>(r, mul(load<v128>(A + p), zeta), P.N_SPIN);
      p += 16;
    } while (p < end);
  }
}

/** h(n + 1) of row j, which goes to the record `out`, and the head. `varies`: sponge or map on the row. */
// @ts-ignore: decorator
@inline
function thicknessRow(head: usize, c: usize, j: i32, out: usize, t: usize, varies: bool): void {
  const now = record(int(c, P.C_NOW), j);
  const previous = record(int(c, P.C_PREVIOUS), j);
  const before = record(int(c, P.C_BEFORE), j);
  const ring = ringRow(c, j);
  const ringNorth = ringRow(c, j + 1);
  const perDx = splat(num(t, P.PER_DX_C));
  const north = splat(num(t, P.DIV_NORTH));
  const south = splat(num(t, P.DIV_SOUTH));
  const push = splat(num(head, P.PUSH_THICKNESS));
  const damping = splat(num(head, P.DAMPING));
  const rest = splat(num(head, P.REST));
  const detrained = splat(num(head, P.DETRAINED));
  const w1 = splat(num(head, P.W1));
  const w0 = splat(num(head, P.W0));
  const wm1 = splat(num(head, P.WM1));
  const wm2 = splat(num(head, P.WM2));
  const quarter = splat(0.25);
  const viscosity = splat(num(head, P.VISCOSITY));
  const sponge = load<u32>(t + P.SPONGE_ROW) ? int(head, P.SPONGE_H) : 0;
  const map = int(head, P.CELL_A);
  const plane = <usize>j * P.PLANE;
  const stop = int(t, P.CELL_RUNS + 4);
  for (let s = int(t, P.CELL_RUNS); s < stop; s += 8) {
    const begin = int(s, 0);
    let a = now + begin;
    let b = previous + begin;
    let d = before + begin;
    let n = out + begin;
    let r = ring + begin;
    let q = ringNorth + begin;
    let p = plane + begin;
    const end = now + int(s, 4);
    do {
      const uW = load<v128>(r, P.N_UT);
      const uE = load<v128>(r, P.N_UT + 8);
      const vS = load<v128>(r, P.N_VT);
      const vN = load<v128>(q, P.N_VT);
      const D = add(mul(sub(uE, uW), perDx), sub(mul(vN, north), mul(vS, south)));
      const O = add(
        mul(sub(load<v128>(r, P.N_FLUX_U + 8), load<v128>(r, P.N_FLUX_U)), perDx),
        sub(mul(load<v128>(q, P.N_FLUX_V), north), mul(load<v128>(r, P.N_FLUX_V), south)),
      );
      const K = mul(quarter, add(add(mul(uW, uW), mul(uE, uE)), add(mul(vS, vS), mul(vN, vN))));
      const h = load<v128>(a, P.H);
      const entrained = load<v128>(r, P.N_ENTRAINED);
      let next = add(h, mul(push, sub(add(sub(mul(damping, sub(rest, h)), detrained), entrained), O)));
      let A = viscosity;
      if (varies) {
        if (sponge) {
          const rate = add(damping, load<v128>(sponge + p));
          const k = mul(splat(num(head, P.HALF_DT)), rate);
          const change = sub(add(sub(mul(rate, sub(rest, h)), detrained), entrained), O);
          next = add(h, div(mul(splat(num(head, P.DT)), change), add(splat(1), k)));
        }
        if (map) A = load<v128>(map + p);
        p += 16;
      }
      store<v128>(n, next, P.H);
      store<v128>(r, D, P.N_DIV);
      store<v128>(r, O, P.N_OUT);
      store<v128>(
        r,
        sub(
          add(
            add(
              add(mul(w1, next), mul(w0, h)),
              add(mul(wm1, load<v128>(b, P.H)), mul(wm2, load<v128>(d, P.H))),
            ),
            K,
          ),
          mul(A, D),
        ),
        P.N_HEAD,
      );
      a += 16;
      b += 16;
      d += 16;
      n += 16;
      r += 16;
      q += 16;
    } while (a < end);
    if (a > end) store<f64>(out + int(s, 4), 0, P.H);
  }
  if (int(head, P.PERIODIC)) {
    wrap(head, out + P.H);
    wrap(head, ring + P.N_HEAD);
    wrap(head, ring + P.N_DIV);
  }
}

function plainThickness(head: usize, c: usize, j: i32, out: usize, t: usize): void {
  thicknessRow(head, c, j, out, t, false);
}

function varyingThickness(head: usize, c: usize, j: i32, out: usize, t: usize): void {
  thicknessRow(head, c, j, out, t, true);
}

export function thickness(head: usize, c: usize, j: i32, out: usize): void {
  const t = tableRow(head, j);
  const sponge = load<u32>(t + P.SPONGE_ROW) != 0 && int(head, P.SPONGE_H) != 0;
  if (sponge || int(head, P.CELL_A) != 0) varyingThickness(head, c, j, out, t);
  else plainThickness(head, c, j, out, t);
}

/** v of row j. `brakes`: drag varies along the row, by entrainment or a sponge. */
// @ts-ignore: decorator
@inline
function meridionalRow(head: usize, c: usize, j: i32, t: usize, brakes: bool): void {
  const stop = int(t, P.V_RUNS + 4);
  const uniform = uniformStress(head, c, j, 1);
  const fields = int(head, P.FIELDS_Y) != 0;
  if (fields) stressRow(head, c, j, 1, uniform, t, P.V_RUNS);
  const keep = splat(num(head, P.KEEP));
  const push = splat(num(head, P.PUSH));
  const south = splat(0.5 * num(t, P.SHARE_SOUTH));
  const north = splat(0.5 * num(t, P.SHARE_NORTH));
  const perDx = splat(num(t, P.PER_DX_V));
  const perDy = splat(num(head, P.PER_DY));
  const floor = splat(num(head, P.STRESS_FLOOR));
  const quarter = splat(0.25);
  const half = splat(num(head, P.HALF_DT));
  const dt = splat(num(head, P.DT));
  const rayleigh = splat(num(head, P.RAYLEIGH));
  const one = splat(1);
  const entrains = int(head, P.ENTRAINS) != 0;
  const sponge = load<u32>(t + P.SPONGE_ROW) ? int(head, P.SPONGE_V) : 0;
  const ring = ringRow(c, j);
  const ringSouth = ringRow(c, j - 1);
  const now = record(int(c, P.C_NOW), j);
  const next = record(int(c, P.C_NEXT), j);
  let S = splat(uniform);
  for (let s = int(t, P.V_RUNS); s < stop; s += 8) {
    const begin = int(s, 0);
    let r = ring + begin;
    let q = ringSouth + begin;
    let a = now + begin;
    let n = next + begin;
    let w = c + P.C_STRESS + begin;
    let p = sponge + <usize>j * P.PLANE + begin;
    const end = now + int(s, 4);
    do {
      if (fields) {
        S = load<v128>(w);
        w += 16;
      }
      const hv = add(mul(south, load<v128>(q, P.N_HT)), mul(north, load<v128>(r, P.N_HT)));
      const C = mul(quarter, add(load<v128>(r, P.N_TURN_V), load<v128>(r, P.N_TURN_V + 8)));
      const G = mul(sub(load<v128>(q, P.N_HEAD), load<v128>(r, P.N_HEAD)), perDy);
      const F = mul(sub(load<v128>(r, P.N_SPIN + 8), load<v128>(r, P.N_SPIN)), perDx);
      const rest = add(add(sub(G, C), F), div(S, atLeast(hv, floor)));
      const old = load<v128>(a, P.V);
      if (brakes) {
        let rate = splat(0);
        if (entrains)
          rate = div(
            add(mul(south, load<v128>(q, P.N_ENTRAINED)), mul(north, load<v128>(r, P.N_ENTRAINED))),
            hv,
          );
        if (sponge) {
          rate = add(rate, load<v128>(p));
          p += 16;
        }
        const k = mul(half, add(rayleigh, rate));
        store<v128>(n, div(add(mul(sub(one, k), old), mul(dt, rest)), add(one, k)), P.V);
      } else store<v128>(n, add(mul(keep, old), mul(push, rest)), P.V);
      r += 16;
      q += 16;
      a += 16;
      n += 16;
    } while (a < end);
    if (a > end) store<f64>(next + int(s, 4), 0, P.V);
  }
  if (int(head, P.PERIODIC)) wrap(head, next + P.V);
}

function freeMeridional(head: usize, c: usize, j: i32, t: usize): void {
  meridionalRow(head, c, j, t, false);
}

function brakedMeridional(head: usize, c: usize, j: i32, t: usize): void {
  meridionalRow(head, c, j, t, true);
}

export function meridional(head: usize, c: usize, j: i32): void {
  const t = tableRow(head, j);
  if (int(t, P.V_RUNS) == int(t, P.V_RUNS + 4)) return;
  const sponge = load<u32>(t + P.SPONGE_ROW) != 0 && int(head, P.SPONGE_V) != 0;
  if (sponge || int(head, P.ENTRAINS) != 0) brakedMeridional(head, c, j, t);
  else freeMeridional(head, c, j, t);
}

/** u of row j. */
// @ts-ignore: decorator
@inline
function zonalRow(head: usize, c: usize, j: i32, t: usize, brakes: bool): void {
  const stop = int(t, P.U_RUNS + 4);
  const uniform = uniformStress(head, c, j, 0);
  const fields = int(head, P.FIELDS_X) != 0;
  if (fields) stressRow(head, c, j, 0, uniform, t, P.U_RUNS);
  const keep = splat(num(head, P.KEEP));
  const push = splat(num(head, P.PUSH));
  const turnSouth = splat(num(t, P.TURN_SOUTH));
  const turnNorth = splat(num(t, P.TURN_NORTH));
  const perDx = splat(num(t, P.PER_DX_C));
  const perDy = splat(num(head, P.PER_DY));
  const floor = splat(num(head, P.STRESS_FLOOR));
  const point = splat(0.5);
  const half = splat(num(head, P.HALF_DT));
  const dt = splat(num(head, P.DT));
  const rayleigh = splat(num(head, P.RAYLEIGH));
  const one = splat(1);
  const entrains = int(head, P.ENTRAINS) != 0;
  const sponge = load<u32>(t + P.SPONGE_ROW) ? int(head, P.SPONGE_U) : 0;
  const ring = ringRow(c, j);
  const ringNorth = ringRow(c, j + 1);
  const now = record(int(c, P.C_NOW), j);
  const next = record(int(c, P.C_NEXT), j);
  let S = splat(uniform);
  for (let s = int(t, P.U_RUNS); s < stop; s += 8) {
    const begin = int(s, 0);
    let r = ring + begin;
    let q = ringNorth + begin;
    let a = now + begin;
    let n = next + begin;
    let w = c + P.C_STRESS + begin;
    let p = sponge + <usize>j * P.PLANE + begin;
    const end = now + int(s, 4);
    do {
      if (fields) {
        S = load<v128>(w);
        w += 16;
      }
      const hu = mul(point, add(load<v128>(r, P.N_HT - 8), load<v128>(r, P.N_HT)));
      const C = add(mul(turnSouth, load<v128>(r, P.N_TURN_U)), mul(turnNorth, load<v128>(q, P.N_TURN_U)));
      const G = mul(sub(load<v128>(r, P.N_HEAD - 8), load<v128>(r, P.N_HEAD)), perDx);
      const F = mul(sub(load<v128>(r, P.N_SPIN), load<v128>(q, P.N_SPIN)), perDy);
      const rest = add(add(add(G, C), F), div(S, atLeast(hu, floor)));
      const old = load<v128>(a, P.U);
      if (brakes) {
        let rate = splat(0);
        if (entrains)
          rate = div(
            mul(point, add(load<v128>(r, P.N_ENTRAINED - 8), load<v128>(r, P.N_ENTRAINED))),
            hu,
          );
        if (sponge) {
          rate = add(rate, load<v128>(p));
          p += 16;
        }
        const k = mul(half, add(rayleigh, rate));
        store<v128>(n, div(add(mul(sub(one, k), old), mul(dt, rest)), add(one, k)), P.U);
      } else store<v128>(n, add(mul(keep, old), mul(push, rest)), P.U);
      r += 16;
      q += 16;
      a += 16;
      n += 16;
    } while (a < end);
    if (a > end) store<f64>(next + int(s, 4), 0, P.U);
  }
  if (int(head, P.PERIODIC)) wrap(head, next + P.U);
}

function freeZonal(head: usize, c: usize, j: i32, t: usize): void {
  zonalRow(head, c, j, t, false);
}

function brakedZonal(head: usize, c: usize, j: i32, t: usize): void {
  zonalRow(head, c, j, t, true);
}

export function zonal(head: usize, c: usize, j: i32): void {
  const t = tableRow(head, j);
  if (int(t, P.U_RUNS) == int(t, P.U_RUNS + 4)) return;
  const sponge = load<u32>(t + P.SPONGE_ROW) != 0 && int(head, P.SPONGE_U) != 0;
  if (sponge || int(head, P.ENTRAINS) != 0) brakedZonal(head, c, j, t);
  else freeZonal(head, c, j, t);
}
