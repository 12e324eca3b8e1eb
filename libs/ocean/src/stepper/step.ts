import type { ForcingBasis } from '../forcing/forcing';
import { E0, E1, E2, P0, P1, PM1, PM2 } from './coefficients';
import type { Levels, Model } from './model';

/**
 * Work that one step did, written by the step when it is given: the sums that budgets are made of. Rates of the
 * step-level energy identity (numerics.md §9) with ub = (u(n) + u(n + 1))/2, before multiplication by
 * ρ0 H dt; areas in m².
 */
export interface StepWork {
  /** Σ A ub S, S = τ/(ρ0 H): wind. */
  wind: number;
  /** Σ A ub²: times −r, Rayleigh drag. */
  speedSquared: number;
  /** Σ A ub F: viscosity. */
  viscous: number;
  /** Σ A ub (Coriolis − g′∇p): kinetic part of what the scheme does numerically. */
  kinetic: number;
  /** Σ A ηb D: times −g′, the potential part. */
  potential: number;
  /** Σ A ηb²: times −κ g′/H, interface damping. */
  etaSquared: number;
  /** Σ A ηb of each cell row, m³: [ny]. */
  etaByRow: Float64Array;
}

/** Empty sums for a model of ny rows. */
export function createWork(ny: number): StepWork {
  return {
    wind: 0,
    speedSquared: 0,
    viscous: 0,
    kinetic: 0,
    potential: 0,
    etaSquared: 0,
    etaByRow: new Float64Array(ny),
  };
}

/**
 * Advances the model by one step of the generalised forward-backward scheme (numerics.md §4). One sweep over rows:
 * row j of (ut, vt, η, pressure, ζ), then v row j, then u row j − 1, so that everything is still in cache. The order
 * of every expression is fixed and the same with and without `work`.
 */
export function stepModel(model: Model, work: StepWork | null = null): void {
  const { ny } = model.grid;
  model.forcing.factors(model.step, model.factors);
  if (work) work.wind = work.speedSquared = work.viscous = work.kinetic = work.potential = work.etaSquared = 0;
  for (let j = 0; j <= ny; j++) {
    if (j < ny) continuityRow(model, j, work);
    if (model.viscosity > 0) spinRow(model, j);
    if (j > 0 && j < ny) {
      if (work) meridionalRowWithWork(model, j, work);
      else meridionalRow(model, j);
    }
    if (j > 0) {
      if (work) zonalRowWithWork(model, j - 1, work);
      else zonalRow(model, j - 1);
    }
  }
  rotate(model.eta);
  rotate(model.u);
  rotate(model.v);
  model.step += 1;
}

function rotate(levels: Levels): void {
  const free = levels.before;
  levels.before = levels.previous;
  levels.previous = levels.now;
  levels.now = levels.next;
  levels.next = free;
}

/** Steps 1 of §4 on one padded row, halo columns included. */
function extrapolateRow(levels: Levels, out: Float64Array, from: number, to: number): void {
  const { now, previous, before } = levels;
  for (let k = from; k < to; k++) out[k] = E0 * now[k] + E1 * previous[k] + E2 * before[k];
}

function continuityRow(model: Model, j: number, work: StepWork | null): void {
  const { grid, ut, vt, divergence, head, rows, cells, dt, damping, reducedGravity, restThickness, viscosity } = model;
  const { stride } = grid;
  const base = (j + 1) * stride;
  extrapolateRow(model.u, ut, base, base + stride);
  extrapolateRow(model.v, vt, base + stride, base + 2 * stride);
  const { now, previous, before, next } = model.eta;
  const keep = (1 - 0.5 * damping * dt) / (1 + 0.5 * damping * dt);
  const drain = (dt * restThickness) / (1 + 0.5 * damping * dt);
  const perDx = rows.perDxC[j];
  const north = rows.divNorth[j];
  const south = rows.divSouth[j];
  const w1 = reducedGravity * P1;
  const w0 = reducedGravity * P0;
  const wm1 = reducedGravity * PM1;
  const wm2 = reducedGravity * PM2;
  const { bounds, rowStart } = cells;
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++) {
    const end = bounds[2 * s + 1];
    for (let k = bounds[2 * s]; k < end; k++) {
      const D = (ut[k + 1] - ut[k]) * perDx + (vt[k + stride] * north - vt[k] * south);
      const eta = now[k];
      const etaN = keep * eta - drain * D;
      next[k] = etaN;
      divergence[k] = D;
      head[k] = w1 * etaN + w0 * eta + (wm1 * previous[k] + wm2 * before[k]) - viscosity * D;
    }
  }
  if (grid.periodic) {
    wrapRow(next, base, grid.nx);
    wrapRow(head, base, grid.nx);
    wrapRow(divergence, base, grid.nx);
  }
  if (work) continuityWork(model, j, work);
}

/** Sums over the cells of a row that was just stepped. */
function continuityWork(model: Model, j: number, work: StepWork): void {
  const { divergence, cells, grid } = model;
  const { now, next } = model.eta;
  const { bounds, rowStart } = cells;
  let sum = 0;
  let squares = 0;
  let product = 0;
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++) {
    const end = bounds[2 * s + 1];
    for (let k = bounds[2 * s]; k < end; k++) {
      const etaB = 0.5 * (now[k] + next[k]);
      sum += etaB;
      squares += etaB * etaB;
      product += etaB * divergence[k];
    }
  }
  const area = grid.dxC[j] * grid.dy;
  work.etaByRow[j] = area * sum;
  work.etaSquared += area * squares;
  work.potential += area * product;
}

function wrapRow(data: Float64Array, base: number, nx: number): void {
  data[base] = data[base + nx];
  data[base + nx + 1] = data[base + 1];
}

/** A s ζ at corner row j. */
function spinRow(model: Model, j: number): void {
  const { grid, ut, vt, spin, slipViscosity, rows } = model;
  const { stride, nx } = grid;
  const base = (j + 1) * stride;
  const perDx = rows.perDxV[j];
  const north = rows.curlNorth[j];
  const south = rows.curlSouth[j];
  // The row beyond the northern wall is never extrapolated: ut stays 0 there.
  for (let k = base + 1; k <= base + nx + 1; k++)
    spin[k] = slipViscosity[k] * ((vt[k] - vt[k - 1]) * perDx - (ut[k] * north - ut[k - stride] * south));
}

/** Writes τ/(ρ0 H) of one row into model.stressRow, indexed by column + 1. */
function stressOfRow(model: Model, j: number, component: 'x' | 'y'): void {
  const { forcing, factors, stressRow, density, restThickness, grid } = model;
  const perMass = 1 / (density * restThickness);
  let uniform = 0;
  for (let b = 0; b < forcing.bases.length; b++) {
    const row = rowProfile(forcing.bases[b], component);
    if (row) uniform += factors[b] * row[j];
  }
  stressRow.fill(uniform * perMass);
  const base = (j + 1) * grid.stride;
  for (let b = 0; b < forcing.bases.length; b++) {
    const field = component === 'x' ? forcing.bases[b].tauxField : forcing.bases[b].tauyField;
    if (!field) continue;
    const factor = factors[b] * perMass;
    for (let i = 0; i < stressRow.length; i++) stressRow[i] += factor * field[base + i];
  }
}

function rowProfile(basis: ForcingBasis, component: 'x' | 'y'): Float64Array | null {
  return component === 'x' ? basis.tauxRow : basis.tauyRow;
}

function meridionalRow(model: Model, j: number): void {
  const { grid, ut, head, spin, rows, vPoints, dt, rayleigh, stressRow } = model;
  const { stride, dy } = grid;
  const base = (j + 1) * stride;
  stressOfRow(model, j, 'y');
  const { now, next } = model.v;
  const keep = (1 - 0.5 * rayleigh * dt) / (1 + 0.5 * rayleigh * dt);
  const push = dt / (1 + 0.5 * rayleigh * dt);
  const turn = rows.coriolisV[j];
  const perDx = rows.perDxV[j];
  const perDy = 1 / dy;
  const { bounds, rowStart } = vPoints;
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++) {
    const end = bounds[2 * s + 1];
    for (let k = bounds[2 * s]; k < end; k++) {
      const C = turn * (ut[k - stride] + ut[k - stride + 1] + (ut[k] + ut[k + 1]));
      const P = (head[k - stride] - head[k]) * perDy;
      const F = (spin[k + 1] - spin[k]) * perDx;
      next[k] = keep * now[k] + push * (P - C + F + stressRow[k - base]);
    }
  }
  if (grid.periodic) wrapRow(next, base, grid.nx);
}

function zonalRow(model: Model, j: number): void {
  const { grid, vt, head, spin, rows, uPoints, dt, rayleigh, stressRow } = model;
  const { stride, dy } = grid;
  const base = (j + 1) * stride;
  stressOfRow(model, j, 'x');
  const { now, next } = model.u;
  const keep = (1 - 0.5 * rayleigh * dt) / (1 + 0.5 * rayleigh * dt);
  const push = dt / (1 + 0.5 * rayleigh * dt);
  const turnSouth = rows.coriolisSouth[j];
  const turnNorth = rows.coriolisNorth[j];
  const perDx = rows.perDxC[j];
  const perDy = 1 / dy;
  const { bounds, rowStart } = uPoints;
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++) {
    const end = bounds[2 * s + 1];
    for (let k = bounds[2 * s]; k < end; k++) {
      const C = turnSouth * (vt[k - 1] + vt[k]) + turnNorth * (vt[k + stride - 1] + vt[k + stride]);
      const P = (head[k - 1] - head[k]) * perDx;
      const F = (spin[k] - spin[k + stride]) * perDy;
      next[k] = keep * now[k] + push * (P + C + F + stressRow[k - base]);
    }
  }
  if (grid.periodic) wrapRow(next, base, grid.nx);
}

// The two rows below step by the very same expressions and add up the work of each term on the way.

function meridionalRowWithWork(model: Model, j: number, work: StepWork): void {
  const { grid, ut, head, divergence, spin, rows, vPoints, dt, rayleigh, viscosity, stressRow } = model;
  const { stride, dy } = grid;
  const base = (j + 1) * stride;
  stressOfRow(model, j, 'y');
  const { now, next } = model.v;
  const keep = (1 - 0.5 * rayleigh * dt) / (1 + 0.5 * rayleigh * dt);
  const push = dt / (1 + 0.5 * rayleigh * dt);
  const turn = rows.coriolisV[j];
  const perDx = rows.perDxV[j];
  const perDy = 1 / dy;
  const viscousPerDy = viscosity * perDy;
  const { bounds, rowStart } = vPoints;
  let wind = 0;
  let squares = 0;
  let viscous = 0;
  let kinetic = 0;
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++) {
    const end = bounds[2 * s + 1];
    for (let k = bounds[2 * s]; k < end; k++) {
      const C = turn * (ut[k - stride] + ut[k - stride + 1] + (ut[k] + ut[k + 1]));
      const P = (head[k - stride] - head[k]) * perDy;
      const F = (spin[k + 1] - spin[k]) * perDx;
      const S = stressRow[k - base];
      const v = now[k];
      const vN = keep * v + push * (P - C + F + S);
      next[k] = vN;
      const vB = 0.5 * (v + vN);
      const stretch = (divergence[k] - divergence[k - stride]) * viscousPerDy;
      wind += vB * S;
      squares += vB * vB;
      viscous += vB * (F + stretch);
      kinetic += vB * (P - C - stretch);
    }
  }
  if (grid.periodic) wrapRow(next, base, grid.nx);
  addWork(work, grid.dxV[j] * dy, wind, squares, viscous, kinetic);
}

function zonalRowWithWork(model: Model, j: number, work: StepWork): void {
  const { grid, vt, head, divergence, spin, rows, uPoints, dt, rayleigh, viscosity, stressRow } = model;
  const { stride, dy } = grid;
  const base = (j + 1) * stride;
  stressOfRow(model, j, 'x');
  const { now, next } = model.u;
  const keep = (1 - 0.5 * rayleigh * dt) / (1 + 0.5 * rayleigh * dt);
  const push = dt / (1 + 0.5 * rayleigh * dt);
  const turnSouth = rows.coriolisSouth[j];
  const turnNorth = rows.coriolisNorth[j];
  const perDx = rows.perDxC[j];
  const perDy = 1 / dy;
  const viscousPerDx = viscosity * perDx;
  const { bounds, rowStart } = uPoints;
  let wind = 0;
  let squares = 0;
  let viscous = 0;
  let kinetic = 0;
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++) {
    const end = bounds[2 * s + 1];
    for (let k = bounds[2 * s]; k < end; k++) {
      const C = turnSouth * (vt[k - 1] + vt[k]) + turnNorth * (vt[k + stride - 1] + vt[k + stride]);
      const P = (head[k - 1] - head[k]) * perDx;
      const F = (spin[k] - spin[k + stride]) * perDy;
      const S = stressRow[k - base];
      const u = now[k];
      const uN = keep * u + push * (P + C + F + S);
      next[k] = uN;
      const uB = 0.5 * (u + uN);
      const stretch = (divergence[k] - divergence[k - 1]) * viscousPerDx;
      wind += uB * S;
      squares += uB * uB;
      viscous += uB * (F + stretch);
      kinetic += uB * (P + C - stretch);
    }
  }
  if (grid.periodic) wrapRow(next, base, grid.nx);
  addWork(work, grid.dxC[j] * dy, wind, squares, viscous, kinetic);
}

function addWork(work: StepWork, area: number, wind: number, squares: number, viscous: number, kinetic: number): void {
  work.wind += area * wind;
  work.speedSquared += area * squares;
  work.viscous += area * viscous;
  work.kinetic += area * kinetic;
}
