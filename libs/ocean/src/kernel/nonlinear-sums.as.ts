// Row sums of the nonlinear step: stepper/nonlinear/nonlinear-sums.ts on pairs of columns. The two lanes are its two
// accumulators. What lies behind the end of a run may be no number at all: it is masked out of every product.
import { ringRow } from './nonlinear.as';
import { put, record, tableRow, uniformStress, within } from './rows.as';
import * as P from './places.as';
import { add, both, div, int, mul, num, splat, sub } from './vector.as';

// Terms in the order of NONLINEAR_TERMS, then the northward and the eastward fluxes.
const WIND: i32 = 0;
const SQUARE: i32 = 2;
const SPONGE: i32 = 4;
const VISCOUS: i32 = 6;
const KINETIC: i32 = 8;
const DILUTED: i32 = 10;
const ETA: i32 = 12;
const BERNOULLI: i32 = 13;
const BERNOULLI_OUTFLOW: i32 = 14;
const BERNOULLI_ETA: i32 = 15;
const ENTRAINED: i32 = 16;
const BERNOULLI_ENTRAINED: i32 = 17;
const DETRAINED: i32 = 18;
const SPONGE_ETA: i32 = 19;
const BERNOULLI_SPONGE_ETA: i32 = 20;
export const LIMITED: i32 = 21;
export const CLIPPED: i32 = 22;
const NORTHWARD: i32 = 23;
const EASTWARD: i32 = 24;

// @ts-ignore: decorator
@inline
function keep(value: v128, inside: v128): v128 {
  return v128.and(value, inside);
}

// @ts-ignore: decorator
@inline
function squares(now: v128, next: v128): v128 {
  return add(mul(now, now), mul(next, next));
}

/** Sums over the cells of row j; the velocities of the new level around them are there. */
export function cellSums(head: usize, c: usize, j: i32): void {
  const t = tableRow(head, j);
  const now = record(int(c, P.C_NOW), j);
  const next = record(int(c, P.C_NEXT), j);
  const ring = ringRow(c, j);
  const sponge = load<u32>(t + P.SPONGE_ROW) ? int(head, P.SPONGE_H) : 0;
  const plane = sponge + <usize>j * P.PLANE;
  const rest = splat(num(head, P.REST));
  const gravity = splat(num(head, P.GRAVITY));
  const half = splat(0.5);
  const eighth = splat(0.125);
  let eta: f64 = 0;
  let bernoulli: f64 = 0;
  let work: f64 = 0;
  let damped: f64 = 0;
  let entrained: f64 = 0;
  let lifted: f64 = 0;
  let drained: f64 = 0;
  let spent: f64 = 0;
  const stop = int(t, P.CELL_RUNS + 4);
  for (let s = int(t, P.CELL_RUNS); s < stop; s += 8) {
    let p = int(s, 0);
    const end = int(s, 4);
    let sum0 = splat(0);
    let sum1 = splat(0);
    let sum2 = splat(0);
    let sum3 = splat(0);
    let sum4 = splat(0);
    let sum5 = splat(0);
    let sum6 = splat(0);
    let sum7 = splat(0);
    let inside = i64x2.splat(-1);
    do {
      if (p + 8 == end) inside = i64x2(-1, 0);
      const a = now + p;
      const n = next + p;
      const zonal = add(
        squares(load<v128>(a, P.U), load<v128>(n, P.U)),
        squares(load<v128>(a, P.U + 8), load<v128>(n, P.U + 8)),
      );
      const meridional = add(
        squares(load<v128>(a, P.V), load<v128>(n, P.V)),
        squares(load<v128>(a, P.RECORD + P.V), load<v128>(n, P.RECORD + P.V)),
      );
      const etaB = keep(
        mul(half, add(sub(load<v128>(a, P.H), rest), sub(load<v128>(n, P.H), rest))),
        inside,
      );
      const B = keep(add(mul(gravity, etaB), mul(eighth, add(zonal, meridional))), inside);
      const source = keep(load<v128>(ring + p, P.N_ENTRAINED), inside);
      sum0 = add(sum0, etaB);
      sum1 = add(sum1, B);
      sum2 = add(sum2, keep(mul(B, load<v128>(ring + p, P.N_OUT)), inside));
      sum3 = add(sum3, mul(B, etaB));
      sum4 = add(sum4, source);
      sum5 = add(sum5, mul(B, source));
      if (sponge) {
        const lost = mul(load<v128>(plane + p), etaB);
        sum6 = add(sum6, lost);
        sum7 = add(sum7, mul(B, lost));
      }
      p += 16;
    } while (p < end);
    eta += both(sum0);
    bernoulli += both(sum1);
    work += both(sum2);
    damped += both(sum3);
    entrained += both(sum4);
    lifted += both(sum5);
    drained += both(sum6);
    spent += both(sum7);
  }
  put(head, c, ETA, j, eta);
  put(head, c, BERNOULLI, j, bernoulli);
  put(head, c, BERNOULLI_OUTFLOW, j, work);
  put(head, c, BERNOULLI_ETA, j, damped);
  put(head, c, ENTRAINED, j, entrained);
  put(head, c, BERNOULLI_ENTRAINED, j, lifted);
  put(head, c, SPONGE_ETA, j, drained);
  put(head, c, BERNOULLI_SPONGE_ETA, j, spent);
  put(head, c, DETRAINED, j, num(head, P.DETRAINED));
}

/** Sums over the v points of row j, just stepped. `hSouth`: record of the new h of row j − 1. */
export function meridionalSums(head: usize, c: usize, j: i32, hSouth: usize): void {
  const t = tableRow(head, j);
  const now = record(int(c, P.C_NOW), j);
  const next = record(int(c, P.C_NEXT), j);
  const ring = ringRow(c, j);
  const ringSouth = ringRow(c, j - 1);
  const fields = int(head, P.FIELDS_Y) != 0;
  const stress = c + P.C_STRESS;
  const map = int(head, P.CELL_A);
  const mapRow = map + <usize>j * P.PLANE;
  const entrains = int(head, P.ENTRAINS) != 0;
  const sponge = load<u32>(t + P.SPONGE_ROW) ? int(head, P.SPONGE_V) : 0;
  const rate = sponge + <usize>j * P.PLANE;
  const south = splat(0.5 * num(t, P.SHARE_SOUTH));
  const north = splat(0.5 * num(t, P.SHARE_NORTH));
  const perDx = splat(num(t, P.PER_DX_V));
  const perDy = splat(num(head, P.PER_DY));
  const floor = splat(num(head, P.STRESS_FLOOR));
  const half = splat(0.5);
  const quarter = splat(0.25);
  const viscosity = splat(num(head, P.VISCOSITY));
  let S = splat(uniformStress(head, c, j, 1));
  let wind: f64 = 0;
  let square: f64 = 0;
  let viscous: f64 = 0;
  let kinetic: f64 = 0;
  let flux: f64 = 0;
  let diluted: f64 = 0;
  let braked: f64 = 0;
  const stop = int(t, P.V_RUNS + 4);
  for (let s = int(t, P.V_RUNS); s < stop; s += 8) {
    let p = int(s, 0);
    const end = int(s, 4);
    let sum0 = splat(0);
    let sum1 = splat(0);
    let sum2 = splat(0);
    let sum3 = splat(0);
    let sum4 = splat(0);
    let sum5 = splat(0);
    let sum6 = splat(0);
    let inside = i64x2.splat(-1);
    do {
      if (p + 8 == end) inside = i64x2(-1, 0);
      const r = ring + p;
      const q = ringSouth + p;
      const hv = add(mul(south, load<v128>(q, P.N_HT)), mul(north, load<v128>(r, P.N_HT)));
      const C = mul(quarter, add(load<v128>(r, P.N_TURN_V), load<v128>(r, P.N_TURN_V + 8)));
      const G = mul(sub(load<v128>(q, P.N_HEAD), load<v128>(r, P.N_HEAD)), perDy);
      const F = mul(sub(load<v128>(r, P.N_SPIN + 8), load<v128>(r, P.N_SPIN)), perDx);
      if (fields) S = load<v128>(stress + p);
      const acceleration = div(S, f64x2.pmax(hv, floor));
      let A = viscosity;
      let ASouth = viscosity;
      if (map) {
        A = load<v128>(mapRow + p);
        ASouth = load<v128>(mapRow + p - P.PLANE);
      }
      const stretch = mul(sub(mul(A, load<v128>(r, P.N_DIV)), mul(ASouth, load<v128>(q, P.N_DIV))), perDy);
      const mass = mul(
        half,
        add(
          mul(south, add(load<v128>(now - P.RECORD + p, P.H), load<v128>(hSouth + p, P.H))),
          mul(north, add(load<v128>(now + p, P.H), load<v128>(next + p, P.H))),
        ),
      );
      const middle = mul(half, add(load<v128>(now + p, P.V), load<v128>(next + p, P.V)));
      const momentum = mul(mass, middle);
      const energy = mul(momentum, middle);
      sum0 = add(sum0, keep(mul(momentum, acceleration), inside));
      sum1 = add(sum1, keep(energy, inside));
      sum2 = add(sum2, keep(mul(momentum, add(F, stretch)), inside));
      sum3 = add(sum3, keep(mul(momentum, sub(sub(G, C), stretch)), inside));
      sum4 = add(sum4, keep(load<v128>(r, P.N_FLUX_V), inside));
      if (entrains) {
        const source = add(mul(south, load<v128>(q, P.N_ENTRAINED)), mul(north, load<v128>(r, P.N_ENTRAINED)));
        sum5 = add(sum5, keep(mul(energy, div(source, hv)), inside));
      }
      if (sponge) sum6 = add(sum6, keep(mul(energy, load<v128>(rate + p)), inside));
      p += 16;
    } while (p < end);
    wind += both(sum0);
    square += both(sum1);
    viscous += both(sum2);
    kinetic += both(sum3);
    flux += both(sum4);
    diluted += both(sum5);
    braked += both(sum6);
  }
  put(head, c, WIND + 1, j, wind);
  put(head, c, SQUARE + 1, j, square);
  put(head, c, VISCOUS + 1, j, viscous);
  put(head, c, KINETIC + 1, j, kinetic);
  put(head, c, NORTHWARD, j, flux);
  put(head, c, DILUTED + 1, j, diluted);
  put(head, c, SPONGE + 1, j, braked);
}

/** Sums over the u points of row j, just stepped, and the eastward fluxes of the asked columns. */
export function zonalSums(head: usize, c: usize, j: i32): void {
  const t = tableRow(head, j);
  const now = record(int(c, P.C_NOW), j);
  const next = record(int(c, P.C_NEXT), j);
  const ring = ringRow(c, j);
  const ringNorth = ringRow(c, j + 1);
  const fields = int(head, P.FIELDS_X) != 0;
  const stress = c + P.C_STRESS;
  const map = int(head, P.CELL_A);
  const mapRow = map + <usize>j * P.PLANE;
  const entrains = int(head, P.ENTRAINS) != 0;
  const sponge = load<u32>(t + P.SPONGE_ROW) ? int(head, P.SPONGE_U) : 0;
  const rate = sponge + <usize>j * P.PLANE;
  const turnSouth = splat(num(t, P.TURN_SOUTH));
  const turnNorth = splat(num(t, P.TURN_NORTH));
  const perDx = splat(num(t, P.PER_DX_C));
  const perDy = splat(num(head, P.PER_DY));
  const floor = splat(num(head, P.STRESS_FLOOR));
  const half = splat(0.5);
  const quarter = splat(0.25);
  const viscosity = splat(num(head, P.VISCOSITY));
  let S = splat(uniformStress(head, c, j, 0));
  let wind: f64 = 0;
  let square: f64 = 0;
  let viscous: f64 = 0;
  let kinetic: f64 = 0;
  let diluted: f64 = 0;
  let braked: f64 = 0;
  const stop = int(t, P.U_RUNS + 4);
  for (let s = int(t, P.U_RUNS); s < stop; s += 8) {
    let p = int(s, 0);
    const end = int(s, 4);
    let sum0 = splat(0);
    let sum1 = splat(0);
    let sum2 = splat(0);
    let sum3 = splat(0);
    let sum5 = splat(0);
    let sum6 = splat(0);
    let inside = i64x2.splat(-1);
    do {
      if (p + 8 == end) inside = i64x2(-1, 0);
      const r = ring + p;
      const q = ringNorth + p;
      const hu = mul(half, add(load<v128>(r, P.N_HT - 8), load<v128>(r, P.N_HT)));
      const C = add(mul(turnSouth, load<v128>(r, P.N_TURN_U)), mul(turnNorth, load<v128>(q, P.N_TURN_U)));
      const G = mul(sub(load<v128>(r, P.N_HEAD - 8), load<v128>(r, P.N_HEAD)), perDx);
      const F = mul(sub(load<v128>(r, P.N_SPIN), load<v128>(q, P.N_SPIN)), perDy);
      if (fields) S = load<v128>(stress + p);
      const acceleration = div(S, f64x2.pmax(hu, floor));
      let A = viscosity;
      let AWest = viscosity;
      if (map) {
        A = load<v128>(mapRow + p);
        AWest = load<v128>(mapRow + p - 8);
      }
      const stretch = mul(sub(mul(A, load<v128>(r, P.N_DIV)), mul(AWest, load<v128>(r, P.N_DIV - 8))), perDx);
      const mass = mul(
        quarter,
        add(
          add(load<v128>(now + p - 8, P.H), load<v128>(next + p - 8, P.H)),
          add(load<v128>(now + p, P.H), load<v128>(next + p, P.H)),
        ),
      );
      const middle = mul(half, add(load<v128>(now + p, P.U), load<v128>(next + p, P.U)));
      const momentum = mul(mass, middle);
      const energy = mul(momentum, middle);
      sum0 = add(sum0, keep(mul(momentum, acceleration), inside));
      sum1 = add(sum1, keep(energy, inside));
      sum2 = add(sum2, keep(mul(momentum, add(F, stretch)), inside));
      sum3 = add(sum3, keep(mul(momentum, sub(add(G, C), stretch)), inside));
      if (entrains) {
        const source = mul(half, add(load<v128>(r, P.N_ENTRAINED - 8), load<v128>(r, P.N_ENTRAINED)));
        sum5 = add(sum5, keep(mul(energy, div(source, hu)), inside));
      }
      if (sponge) sum6 = add(sum6, keep(mul(energy, load<v128>(rate + p)), inside));
      p += 16;
    } while (p < end);
    wind += both(sum0);
    square += both(sum1);
    viscous += both(sum2);
    kinetic += both(sum3);
    diluted += both(sum5);
    braked += both(sum6);
  }
  put(head, c, WIND, j, wind);
  put(head, c, SQUARE, j, square);
  put(head, c, VISCOUS, j, viscous);
  put(head, c, KINETIC, j, kinetic);
  put(head, c, DILUTED, j, diluted);
  put(head, c, SPONGE, j, braked);
  const count = <i32>int(head, P.MERIDIANS);
  let m = int(head, P.MERIDIAN_TABLE) + 4 * <usize>j * <usize>count;
  for (let k = 0; k < count; k++) {
    const at = int(m, 0);
    put(head, c, EASTWARD + k, j, at ? load<f64>(ring + at, P.N_FLUX_U) : 0);
    m += 4;
  }
}
