// Row sums of the linear step: stepper/linear/linear-sums.ts on pairs of columns. The two lanes are its two accumulators.
import { ringRow } from './linear.as';
import { put, tableRow, uniformStress, within } from './rows.as';
import * as P from './places.as';
import { add, both, int, mul, num, splat, sub } from './vector.as';

// Terms in the order of LINEAR_TERMS, then the northward and the eastward fluxes.
const WIND: i32 = 0;
const SQUARE: i32 = 2;
const SPONGE: i32 = 4;
const VISCOUS: i32 = 6;
const KINETIC: i32 = 8;
const POTENTIAL: i32 = 10;
const ETA_SQUARED: i32 = 11;
const ETA: i32 = 12;
const SPONGE_ETA_SQUARED: i32 = 13;
const SPONGE_ETA: i32 = 14;
const NORTHWARD: i32 = 15;
const EASTWARD: i32 = 16;

export function putMeridional(
  head: usize,
  c: usize,
  j: i32,
  wind: f64,
  square: f64,
  braked: f64,
  viscous: f64,
  kinetic: f64,
  flux: f64,
): void {
  put(head, c, WIND + 1, j, wind);
  put(head, c, SQUARE + 1, j, square);
  put(head, c, SPONGE + 1, j, braked);
  put(head, c, VISCOUS + 1, j, viscous);
  put(head, c, KINETIC + 1, j, kinetic);
  put(head, c, NORTHWARD, j, flux);
}

export function putZonal(
  head: usize,
  c: usize,
  j: i32,
  wind: f64,
  square: f64,
  braked: f64,
  viscous: f64,
  kinetic: f64,
): void {
  put(head, c, WIND, j, wind);
  put(head, c, SQUARE, j, square);
  put(head, c, SPONGE, j, braked);
  put(head, c, VISCOUS, j, viscous);
  put(head, c, KINETIC, j, kinetic);
}

/** The flux through each asked column of row j. */
export function eastwardSums(head: usize, c: usize, j: i32): void {
  const count = <i32>int(head, P.MERIDIANS);
  let m = int(head, P.MERIDIAN_TABLE) + 4 * <usize>j * <usize>count;
  for (let k = 0; k < count; k++) {
    const at = int(m, 0);
    put(head, c, EASTWARD + k, j, at ? load<f64>(ringRow(c, j) + at, P.UT) : 0);
    m += 4;
  }
}

export function cellSums(head: usize, c: usize, j: i32): void {
  const t = tableRow(head, j);
  const stop = int(t, P.CELL_RUNS + 4);
  const now = int(c, P.C_NOW) + <usize>(j + 1) * P.RECORD + P.H;
  const next = int(c, P.C_NEXT) + <usize>(j + 1) * P.RECORD + P.H;
  const ring = ringRow(c, j);
  const sponge = load<u32>(t + P.SPONGE_ROW) ? int(head, P.SPONGE_H) : 0;
  const rate = sponge + <usize>j * P.PLANE;
  const half = splat(0.5);
  let eta: f64 = 0;
  let squares: f64 = 0;
  let potential: f64 = 0;
  let spongeEta: f64 = 0;
  let spongeSquares: f64 = 0;
  for (let s = int(t, P.CELL_RUNS); s < stop; s += 8) {
    let p = int(s, 0);
    const end = int(s, 4);
    let a = splat(0);
    let b = splat(0);
    let d = splat(0);
    let e = splat(0);
    let f = splat(0);
    let inside = i64x2.splat(-1);
    if (sponge)
      do {
        const middle = v128.and(mul(half, add(load<v128>(now + p), load<v128>(next + p))), within(p, end));
        a = add(a, middle);
        b = add(b, mul(middle, middle));
        d = add(d, mul(middle, load<v128>(ring + p, P.DIV)));
        const drained = mul(load<v128>(rate + p), middle);
        e = add(e, drained);
        f = add(f, mul(drained, middle));
        p += 16;
      } while (p < end);
    else
      do {
        if (p + 8 == end) inside = i64x2(-1, 0);
        const middle = v128.and(mul(half, add(load<v128>(now + p), load<v128>(next + p))), inside);
        a = add(a, middle);
        b = add(b, mul(middle, middle));
        d = add(d, mul(middle, load<v128>(ring + p, P.DIV)));
        p += 16;
      } while (p < end);
    eta += both(a);
    squares += both(b);
    potential += both(d);
    spongeEta += both(e);
    spongeSquares += both(f);
  }
  put(head, c, ETA, j, eta);
  put(head, c, ETA_SQUARED, j, squares);
  put(head, c, POTENTIAL, j, potential);
  put(head, c, SPONGE_ETA, j, spongeEta);
  put(head, c, SPONGE_ETA_SQUARED, j, spongeSquares);
}

export function meridionalSums(head: usize, c: usize, j: i32): void {
  const t = tableRow(head, j);
  const stop = int(t, P.V_RUNS + 4);
  const now = int(c, P.C_NOW) + <usize>(j + 1) * P.RECORD + P.V;
  const next = int(c, P.C_NEXT) + <usize>(j + 1) * P.RECORD + P.V;
  const ring = ringRow(c, j);
  const ringSouth = ringRow(c, j - 1);
  const sponge = load<u32>(t + P.SPONGE_ROW) ? int(head, P.SPONGE_V) : 0;
  const rate = sponge + <usize>j * P.PLANE;
  const fields = int(head, P.FIELDS_Y);
  const stress = c + P.C_STRESS;
  const map = int(head, P.CELL_A);
  const mapRow = map + <usize>j * P.PLANE;
  const turn = splat(num(t, P.CORIOLIS_V));
  const perDx = splat(num(t, P.PER_DX_V));
  const perDy = splat(num(head, P.PER_DY));
  const half = splat(0.5);
  const uniform = splat(uniformStress(head, c, j, 1));
  const viscosity = splat(num(head, P.VISCOSITY));
  let wind: f64 = 0;
  let squares: f64 = 0;
  let viscous: f64 = 0;
  let kinetic: f64 = 0;
  let flux: f64 = 0;
  let braked: f64 = 0;
  for (let s = int(t, P.V_RUNS); s < stop; s += 8) {
    let p = int(s, 0);
    const end = int(s, 4);
    let a = splat(0);
    let b = splat(0);
    let d = splat(0);
    let e = splat(0);
    let f = splat(0);
    let g = splat(0);
    do {
      const r = ring + p;
      const q = ringSouth + p;
      const C = mul(
        turn,
        add(
          add(load<v128>(q, P.UT), load<v128>(r, P.UT)),
          add(load<v128>(q, P.UT + 8), load<v128>(r, P.UT + 8)),
        ),
      );
      const G = mul(sub(load<v128>(q, P.HEAD), load<v128>(r, P.HEAD)), perDy);
      const F = mul(sub(load<v128>(r, P.SPIN + 8), load<v128>(r, P.SPIN)), perDx);
      let north = viscosity;
      let south = viscosity;
      if (map) {
        north = load<v128>(mapRow + p);
        south = load<v128>(mapRow + p - P.PLANE);
      }
      const stretch = mul(sub(mul(north, load<v128>(r, P.DIV)), mul(south, load<v128>(q, P.DIV))), perDy);
      const inside = within(p, end);
      const middle = v128.and(mul(half, add(load<v128>(now + p), load<v128>(next + p))), inside);
      let S = uniform;
      if (fields) S = load<v128>(stress + p);
      a = add(a, mul(middle, S));
      const square = mul(middle, middle);
      b = add(b, square);
      d = add(d, mul(middle, add(F, stretch)));
      e = add(e, mul(middle, sub(sub(G, C), stretch)));
      f = add(f, v128.and(load<v128>(r, P.VT), inside));
      if (sponge) g = add(g, mul(load<v128>(rate + p), square));
      p += 16;
    } while (p < end);
    wind += both(a);
    squares += both(b);
    viscous += both(d);
    kinetic += both(e);
    flux += both(f);
    braked += both(g);
  }
  putMeridional(head, c, j, wind, squares, braked, viscous, kinetic, flux);
}

export function zonalSums(head: usize, c: usize, j: i32): void {
  const t = tableRow(head, j);
  const stop = int(t, P.U_RUNS + 4);
  const now = int(c, P.C_NOW) + <usize>(j + 1) * P.RECORD + P.U;
  const next = int(c, P.C_NEXT) + <usize>(j + 1) * P.RECORD + P.U;
  const ring = ringRow(c, j);
  const ringNorth = ringRow(c, j + 1);
  const sponge = load<u32>(t + P.SPONGE_ROW) ? int(head, P.SPONGE_U) : 0;
  const rate = sponge + <usize>j * P.PLANE;
  const fields = int(head, P.FIELDS_X);
  const stress = c + P.C_STRESS;
  const map = int(head, P.CELL_A);
  const mapRow = map + <usize>j * P.PLANE;
  const turnSouth = splat(num(t, P.CORIOLIS_SOUTH));
  const turnNorth = splat(num(t, P.CORIOLIS_NORTH));
  const perDx = splat(num(t, P.PER_DX_C));
  const perDy = splat(num(head, P.PER_DY));
  const half = splat(0.5);
  const uniform = splat(uniformStress(head, c, j, 0));
  const viscosity = splat(num(head, P.VISCOSITY));
  let wind: f64 = 0;
  let squares: f64 = 0;
  let viscous: f64 = 0;
  let kinetic: f64 = 0;
  let braked: f64 = 0;
  for (let s = int(t, P.U_RUNS); s < stop; s += 8) {
    let p = int(s, 0);
    const end = int(s, 4);
    let a = splat(0);
    let b = splat(0);
    let d = splat(0);
    let e = splat(0);
    let g = splat(0);
    do {
      const r = ring + p;
      const q = ringNorth + p;
      const west = add(mul(turnSouth, load<v128>(r, P.VT - 8)), mul(turnNorth, load<v128>(q, P.VT - 8)));
      const C = add(west, add(mul(turnSouth, load<v128>(r, P.VT)), mul(turnNorth, load<v128>(q, P.VT))));
      const G = mul(sub(load<v128>(r, P.HEAD - 8), load<v128>(r, P.HEAD)), perDx);
      const F = mul(sub(load<v128>(r, P.SPIN), load<v128>(q, P.SPIN)), perDy);
      let A = viscosity;
      let AWest = viscosity;
      if (map) {
        A = load<v128>(mapRow + p);
        AWest = load<v128>(mapRow + p - 8);
      }
      const stretch = mul(sub(mul(A, load<v128>(r, P.DIV)), mul(AWest, load<v128>(r, P.DIV - 8))), perDx);
      const middle = v128.and(mul(half, add(load<v128>(now + p), load<v128>(next + p))), within(p, end));
      let S = uniform;
      if (fields) S = load<v128>(stress + p);
      a = add(a, mul(middle, S));
      const square = mul(middle, middle);
      b = add(b, square);
      d = add(d, mul(middle, add(F, stretch)));
      e = add(e, mul(middle, sub(add(G, C), stretch)));
      if (sponge) g = add(g, mul(load<v128>(rate + p), square));
      p += 16;
    } while (p < end);
    wind += both(a);
    squares += both(b);
    viscous += both(d);
    kinetic += both(e);
    braked += both(g);
  }
  putZonal(head, c, j, wind, squares, braked, viscous, kinetic);
}
