import type { Arena } from './layout';

/**
 * Row sums of the linear step: Σ over the points of a row, without areas or coefficients (`BasinBudget` applies them),
 * with ub = (u(n) + u(n + 1))/2 and ηb alike. S = τ/(ρ0 H); F viscosity; D = div(ut, vt).
 */
export const LINEAR_TERMS = [
  /** Σ ub S. */
  'windU',
  'windV',
  /** Σ ub²: times −r, Rayleigh drag. */
  'squareU',
  'squareV',
  /** Σ ub² r_s of sponges. */
  'spongeU',
  'spongeV',
  /** Σ ub F. */
  'viscousU',
  'viscousV',
  /** Σ ub (Coriolis − g′∇p): kinetic part of what the scheme does numerically. */
  'kineticU',
  'kineticV',
  /** Σ ηb D: times −g′ H, the potential part. */
  'potential',
  /** Σ ηb²: times −κ g′, interface damping; Σ ηb, m. */
  'etaSquared',
  'eta',
  /** Σ κ_s ηb² and Σ κ_s ηb of sponges. */
  'spongeEtaSquared',
  'spongeEta',
] as const;
export type LinearTerm = (typeof LINEAR_TERMS)[number];

/**
 * Row sums of the nonlinear step; h̄, ū means of the step, B = g′ η̄ + K̄ (derivation: nonlinear-sums.ts). u terms are to be
 * multiplied by ρ0 A_u, v terms by ρ0 A_v, cell terms by ρ0 A_c.
 */
export const NONLINEAR_TERMS = [
  /** Σ h̄ ū S, S = τ/(ρ0 max(h, h_s)). */
  'windU',
  'windV',
  /** Σ h̄ ū²: times −r. */
  'squareU',
  'squareV',
  /** Σ h̄ ū² r_s of sponges. */
  'spongeU',
  'spongeV',
  /** Σ h̄ ū F. */
  'viscousU',
  'viscousV',
  /** Σ h̄ ū (turning − grad(g′p + K)). */
  'kineticU',
  'kineticV',
  /** Σ h̄ ū² w_e/h: what entrained water without momentum takes. */
  'dilutedU',
  'dilutedV',
  /** Σ η̄, m; Σ B; Σ B div(U, V); Σ B η̄. */
  'eta',
  'bernoulli',
  'bernoulliOutflow',
  'bernoulliEta',
  /** Σ w_e, m/s; Σ B w_e; the uniform w_d, m/s, once a row. */
  'entrained',
  'bernoulliEntrained',
  'detrained',
  /** Σ κ_s η̄; Σ B κ_s η̄. */
  'spongeEta',
  'bernoulliSpongeEta',
  /** Cells whose outflow was limited, and those whose ht was raised to hmin. */
  'limited',
  'clipped',
] as const;
export type NonlinearTerm = (typeof NONLINEAR_TERMS)[number];

/** What one step did, in row sums; written by the step, read by a recorder at once. */
export interface StepSums<Term extends string = string> {
  /** [ny + 1] each; rows that a term has no points on hold 0. */
  terms: Record<Term, Float64Array>;
  /** Σ of the v fluxes that the step used, over each v row [ny + 1]: vt, m/s (linear); limited v h_v, m²/s (nonlinear). */
  northward: Float64Array;
  /** The u fluxes alike, on each asked column: [asked][ny]. */
  eastward: Float64Array[];
}

/** Takes part in every step, in order. */
export interface StepRecorder {
  add(sums: StepSums): void;
}

/** Where the sums lie in a model's memory: `terms` in order, northward, then each meridian; rows of `rowLength`. */
export interface SumsPlace {
  offset: number;
  rowLength: number;
  terms: readonly string[];
  meridians: readonly number[];
}

/** Reserves memory for one step's sums. */
export function reserveSums(
  arena: Arena,
  ny: number,
  terms: readonly string[],
  meridians: readonly number[],
): SumsPlace {
  const rowLength = 8 * Math.ceil((ny + 1) / 8);
  return { offset: arena.reserve(rowLength * (terms.length + 1 + meridians.length)), rowLength, terms, meridians };
}

/** Views of one step's sums. */
export function sumsAt(data: Float64Array, place: SumsPlace, ny: number): StepSums {
  const row = (k: number, length: number) => {
    const from = place.offset + k * place.rowLength;
    return data.subarray(from, from + length);
  };
  const count = place.terms.length;
  return {
    terms: Object.fromEntries(place.terms.map((term, k) => [term, row(k, ny + 1)])),
    northward: row(count, ny + 1),
    eastward: place.meridians.map((_column, k) => row(count + 1 + k, ny)),
  };
}

/*
 * Order of every row sum: within a run of points two accumulators, one for the points at even and one for those at odd
 * distance from its first, added even + odd at the end of the run, runs in order. A vector of two lanes sums alike, so
 * the bits are the same.
 */
