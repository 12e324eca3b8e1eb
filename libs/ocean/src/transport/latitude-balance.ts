import { WEST } from '../stepper/layout';
import type { LastStep } from '../terms/last-step';
import { createRowTerms, zonalTerms } from '../terms/momentum-terms';

/**
 * What holds the northward transport across a line of latitude, term by term, in the last step: each in m³/s², the rate
 * f V. The rotation of the flow, Σ f V, is the sum of all of them to round-off (numerics.md §9, §12; derived for this
 * project from the scheme's own operators). Sums over the water faces of one u row.
 */
export interface BalanceTerms {
  /** −Σ τx dx/ρ0 (times h_u/max(h_u, h_s) in nonlinear mode): over f the Ekman transport. */
  wind: number;
  /** Σ g′ h_u p_x dx: over f the geostrophic transport. */
  pressure: number;
  /** Σ h_u u_t dx. */
  acceleration: number;
  /** Σ h_u (r + r_s) ū dx. */
  friction: number;
  /** −Σ h_u F dx. */
  viscosity: number;
  /** Coriolis force on land faces: the pressure of the coast on the flow. */
  land: number;
  /** Nonlinear: Σ h_u K_x dx. */
  kinetic: number;
  /** Nonlinear: −Σ h_u × the part of q V that ζ makes. */
  vorticity: number;
  /** Nonlinear: −Σ (h_u/h_q − 1) f V, what the mean over a corner leaves. */
  stretching: number;
  /** Nonlinear: Σ (w_e)_u ū dx, momentum that entrained water takes. */
  entrainment: number;
  /** Nonlinear: Σ f times what the limiter took from the fluxes: they change h, those before it turn. */
  limiter: number;
}
export const BALANCE_TERMS = [
  'wind',
  'pressure',
  'acceleration',
  'friction',
  'viscosity',
  'land',
  'kinetic',
  'vorticity',
  'stretching',
  'entrainment',
  'limiter',
] as const satisfies readonly (keyof BalanceTerms)[];

/** The balance of a u row, between v rows j and j + 1. */
export interface RowBalance {
  /** Transports across v rows j and j + 1 from the fluxes that the step used, m³/s; trapezoid sums on part of a row. */
  south: number;
  north: number;
  /** ½ (f_j V_j + f_{j + 1} V_{j + 1}), m³/s². */
  rotation: number;
  terms: BalanceTerms;
  /**
   * At the u row itself: f_c V_c with V_c = ½ (V_j + V_{j + 1}), f_c = ½ (f_j + f_{j + 1}), is the sum of the terms less this
   * remainder of averaging, ¼ (f_{j + 1} − f_j)(V_{j + 1} − V_j).
   */
  averaging: number;
  /** rotation − Σ terms: round-off. */
  residual: number;
}

/** Cell columns from whose centre to whose centre a part of a row reaches; the whole row when left out. */
export interface RowPart {
  fromCell: number;
  toCell: number;
}

/**
 * The balance of u row j, 0 … ny − 1, of the step that `last` holds; all of the row, or its part between two cell centres
 * (then V is a trapezoid sum with half weights at the ends). Throws RangeError when row or cells are not on the grid.
 */
export function latitudeBalance(last: LastStep, j: number, part?: RowPart): RowBalance {
  const { model, nonlinear } = last;
  const { grid, restThickness } = model;
  const { nx, ny, periodic } = grid;
  if (!(Number.isInteger(j) && j >= 0 && j < ny))
    throw new RangeError(`u rows are numbered 0 to ${ny - 1}; ${j} arrived.`);
  if (part && !(part.fromCell >= 0 && part.toCell > part.fromCell && part.toCell < nx))
    throw new RangeError(
      `A part of a row reaches from one cell to one east of it, 0 to ${nx - 1}; ${part.fromCell} to ${part.toCell} arrived.`,
    );
  const first = part ? part.fromCell + 1 : 0;
  const end = part ? part.toCell + 1 : periodic ? nx : nx + 1;
  const row = createRowTerms(nx);
  zonalTerms(last, j, row);
  const water = waterFaces(last, j);
  const terms: BalanceTerms = noTerms();
  let [south, north] = [0, 0];
  const dx = grid.dxC[j];
  for (let i = first; i < end; i++) {
    const used = [0.5 * transportOf(last, i, j, 'used'), 0.5 * transportOf(last, i, j + 1, 'used')];
    const V = [0.5 * transportOf(last, i, j, 'turning'), 0.5 * transportOf(last, i, j + 1, 'turning')];
    south += used[0];
    north += used[1];
    const turning = 0.5 * (grid.f[j] * V[0] + grid.f[j + 1] * V[1]);
    terms.limiter += 0.5 * (grid.f[j] * (used[0] - V[0]) + grid.f[j + 1] * (used[1] - V[1]));
    if (!water[i]) {
      terms.land += turning;
      continue;
    }
    const h = (nonlinear ? nonlinear.zonalThickness(i, j) : restThickness) * dx;
    terms.wind -= h * row.wind[i];
    terms.pressure -= h * row.pressure[i];
    terms.acceleration += h * row.tendency[i];
    terms.friction -= h * (row.rayleigh[i] + row.sponge[i]);
    terms.viscosity -= h * row.viscosity[i];
    if (!nonlinear) continue;
    terms.kinetic -= h * row.kinetic[i];
    terms.vorticity -= h * row.vorticity[i];
    terms.stretching -= stretchingOf(last, i, j);
    terms.entrainment -= h * row.entrainment[i];
  }
  const rotation = 0.5 * (grid.f[j] * south + grid.f[j + 1] * north);
  return {
    south,
    north,
    rotation,
    terms,
    averaging: 0.25 * (grid.f[j + 1] - grid.f[j]) * (north - south),
    residual: rotation - sumOf(terms),
  };
}

/**
 * The balance at v row j, 1 … ny − 1, the equator included: the difference of the two u rows beside it, m²/s². With
 * β = (f_{j + 1} − f_{j − 1})/(2 dy) and f̄ = ½ (f_{j + 1} + f_{j − 1}), exact on any grid,
 * β ½ (V_{j + 1} + V_{j − 1}) + f̄ (V_{j + 1} − V_{j − 1})/(2 dy) is the sum of the terms: β V = curl of the wind + torques of
 * pressure on the coasts and of friction + tendency, less stretching.
 */
export interface EquatorValidBalance {
  /** Transports across v rows j − 1, j and j + 1, m³/s. */
  south: number;
  here: number;
  north: number;
  /** β ½ (V_{j + 1} + V_{j − 1}), m²/s². */
  beta: number;
  /** f̄ (V_{j + 1} − V_{j − 1})/(2 dy), m²/s². */
  stretchingOfColumns: number;
  /** d/dy of the terms of the u rows, m²/s². */
  terms: BalanceTerms;
  /** beta + stretchingOfColumns − Σ terms: round-off. */
  residual: number;
}

/** The equator-valid balance of the step that `last` holds. Throws RangeError when the row is no inner v row. */
export function equatorValidBalance(last: LastStep, j: number, part?: RowPart): EquatorValidBalance {
  const { f, dy, ny } = last.model.grid;
  if (!(Number.isInteger(j) && j >= 1 && j < ny))
    throw new RangeError(`Inner v rows are numbered 1 to ${ny - 1}; ${j} arrived.`);
  const below = latitudeBalance(last, j - 1, part);
  const above = latitudeBalance(last, j, part);
  const terms = noTerms();
  for (const term of BALANCE_TERMS) terms[term] = (above.terms[term] - below.terms[term]) / dy;
  const beta = ((f[j + 1] - f[j - 1]) / (2 * dy)) * 0.5 * (above.north + below.south);
  const stretchingOfColumns = (0.5 * (f[j + 1] + f[j - 1]) * (above.north - below.south)) / (2 * dy);
  return {
    south: below.south,
    here: above.south,
    north: above.north,
    beta,
    stretchingOfColumns,
    terms,
    residual: beta + stretchingOfColumns - sumOf(terms),
  };
}

/** Σ of the terms in fixed order. */
export function sumOf(terms: BalanceTerms): number {
  return BALANCE_TERMS.reduce((sum, term) => sum + terms[term], 0);
}

/** Terms of 0. */
export function noTerms(): BalanceTerms {
  return Object.fromEntries(BALANCE_TERMS.map((term) => [term, 0])) as unknown as BalanceTerms;
}

/** What the mean over corners leaves at u point i of row j: ½ Σ (h_u/h_q − 1) f V, m³/s². */
function stretchingOf(last: LastStep, i: number, j: number): number {
  const { nonlinear, model } = last;
  if (!nonlinear) return 0;
  const h = nonlinear.zonalThickness(i, j);
  const at = (corner: number) =>
    (h / nonlinear.cornerThickness[last.at(corner) + i] - 1) *
    model.grid.f[corner] *
    transportOf(last, i, corner, 'turning');
  return 0.25 * (at(j) + at(j + 1));
}

/** Water faces of u row j, [nx + 1]; the face at nx of a periodic grid is left out. */
function waterFaces({ model }: LastStep, j: number): Uint8Array {
  const { grid, spans } = model;
  const water = new Uint8Array(grid.nx + 1);
  for (let s = spans.uPoints.rowStart[j]; s < spans.uPoints.rowStart[j + 1]; s++)
    water.fill(1, spans.uPoints.bounds[2 * s] - WEST, spans.uPoints.bounds[2 * s + 1] - WEST);
  return water;
}

/**
 * Flux through the v faces west and east of u point i on v row j together, m³/s; nothing beyond walls: that which changed
 * h, or that which turned.
 */
function transportOf(last: LastStep, i: number, j: number, which: 'used' | 'turning'): number {
  const { model, nonlinear, vt } = last;
  const k = last.at(j) + i;
  const dx = model.grid.dxV[j];
  if (!nonlinear) return (vt[k - 1] + vt[k]) * model.restThickness * dx;
  const flux = which === 'used' ? nonlinear.fluxV : nonlinear.turningV;
  return (flux[k - 1] + flux[k]) * dx;
}
