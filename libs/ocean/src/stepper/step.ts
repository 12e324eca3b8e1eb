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
 * row j of (ut, vt, η, pressure, ζ), then v row j, then u row j − 1. What a step makes on the way lives in rings of four
 * rows that stay in the innermost cache. The order of every expression is fixed and the same with and without `work`.
 */
export function stepModel(model: Model, work: StepWork | null = null): void {
  const { ny, stride } = model.grid;
  model.forcing.factors(model.step, model.factors);
  if (work) work.wind = work.speedSquared = work.viscous = work.kinetic = work.potential = work.etaSquared = 0;
  // Beyond the southern wall nothing moves, and nothing moves through it.
  model.ut.fill(0, ringRow(-1) * stride, (ringRow(-1) + 1) * stride);
  model.vt.fill(0, ringRow(0) * stride, (ringRow(0) + 1) * stride);
  for (let j = 0; j <= ny; j++) {
    if (j < ny) continuityRow(model, j, work);
    else model.ut.fill(0, ringRow(ny) * stride, (ringRow(ny) + 1) * stride);
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

/** Place of row j in a ring of four. */
function ringRow(j: number): number {
  return (j + 4) & 3;
}

/** Step 1 of §4 at padded index k. */
function extrapolated({ now, previous, before }: Levels, k: number): number {
  return E0 * now[k] + E1 * previous[k] + E2 * before[k];
}

/**
 * Steps 1 to 4 of §4 on one row: u of this row and v of the next at n + ½, then η and the pressure. Land needs no
 * exception: all faces of a land cell stand still, so its η stays 0.
 */
function continuityRow(model: Model, j: number, work: StepWork | null): void {
  const { grid, ut, vt, divergence, head, rows, dt, damping, reducedGravity, restThickness, viscosity } = model;
  const { stride, nx } = grid;
  const base = (j + 1) * stride;
  const here = ringRow(j) * stride - base;
  const there = ringRow(j + 1) * stride - base;
  const { now: u, previous: uP, before: uPP } = model.u;
  const { now: v, previous: vP, before: vPP } = model.v;
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
  ut[base + here] = extrapolated(model.u, base);
  vt[base + there] = extrapolated(model.v, base + stride);
  vt[base + there + nx + 1] = extrapolated(model.v, base + stride + nx + 1);
  let west = extrapolated(model.u, base + 1);
  ut[base + here + 1] = west;
  const end = base + nx;
  for (let k = base + 1; k <= end; k++) {
    const east = E0 * u[k + 1] + E1 * uP[k + 1] + E2 * uPP[k + 1];
    ut[k + here + 1] = east;
    const v1 = E0 * v[k + stride] + E1 * vP[k + stride] + E2 * vPP[k + stride];
    vt[k + there] = v1;
    const D = (east - west) * perDx + (v1 * north - vt[k + here] * south);
    west = east;
    const eta = now[k];
    const etaN = keep * eta - drain * D;
    next[k] = etaN;
    divergence[k + here] = D;
    head[k + here] = w1 * etaN + w0 * eta + (wm1 * previous[k] + wm2 * before[k]) - viscosity * D;
  }
  if (grid.periodic) {
    wrapRow(next, base, nx);
    wrapRow(head, base + here, nx);
    wrapRow(divergence, base + here, nx);
  }
  if (work) continuityWork(model, j, work);
}

/** Sums over the cells of a row that was just stepped. */
function continuityWork(model: Model, j: number, work: StepWork): void {
  const { divergence, cells, grid } = model;
  const { now, next } = model.eta;
  const { bounds, rowStart } = cells;
  const here = (ringRow(j) - (j + 1)) * grid.stride;
  let sum = 0;
  let squares = 0;
  let product = 0;
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++) {
    const end = bounds[2 * s + 1];
    for (let k = bounds[2 * s]; k < end; k++) {
      const etaB = 0.5 * (now[k] + next[k]);
      sum += etaB;
      squares += etaB * etaB;
      product += etaB * divergence[k + here];
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

/** A s ζ at corner row j: the viscosity times ζ, with the slip factor put on the corners that touch land. */
function spinRow(model: Model, j: number): void {
  const { grid, ut, vt, spin, viscosity, rows, coastCorners } = model;
  const { stride, nx } = grid;
  const base = ringRow(j) * stride;
  const below = (ringRow(j - 1) - ringRow(j)) * stride;
  const perDx = rows.perDxV[j];
  const north = rows.curlNorth[j];
  const south = rows.curlSouth[j];
  let west = vt[base];
  for (let k = base + 1; k <= base + nx + 1; k++) {
    const east = vt[k];
    spin[k] = viscosity * ((east - west) * perDx - (ut[k] * north - ut[k + below] * south));
    west = east;
  }
  const slip = model.slip === 'free' ? 0 : 2;
  const { rowStart, columns } = coastCorners;
  for (let c = rowStart[j]; c < rowStart[j + 1]; c++) spin[base + columns[c]] *= slip;
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
  const here = ringRow(j) * stride - base;
  const below = ringRow(j - 1) * stride - base;
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
    let west = ut[bounds[2 * s] + below] + ut[bounds[2 * s] + here];
    let spinWest = spin[bounds[2 * s] + here];
    for (let k = bounds[2 * s]; k < end; k++) {
      const east = ut[k + below + 1] + ut[k + here + 1];
      const spinEast = spin[k + here + 1];
      const C = turn * (west + east);
      const P = (head[k + below] - head[k + here]) * perDy;
      const F = (spinEast - spinWest) * perDx;
      west = east;
      spinWest = spinEast;
      next[k] = keep * now[k] + push * (P - C + F + stressRow[k - base]);
    }
  }
  if (grid.periodic) wrapRow(next, base, grid.nx);
}

function zonalRow(model: Model, j: number): void {
  const { grid, vt, head, spin, rows, uPoints, dt, rayleigh, stressRow } = model;
  const { stride, dy } = grid;
  const base = (j + 1) * stride;
  const here = ringRow(j) * stride - base;
  const above = ringRow(j + 1) * stride - base;
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
    let west = turnSouth * vt[bounds[2 * s] + here - 1] + turnNorth * vt[bounds[2 * s] + above - 1];
    let headWest = head[bounds[2 * s] + here - 1];
    for (let k = bounds[2 * s]; k < end; k++) {
      const east = turnSouth * vt[k + here] + turnNorth * vt[k + above];
      const headEast = head[k + here];
      const C = west + east;
      const P = (headWest - headEast) * perDx;
      const F = (spin[k + here] - spin[k + above]) * perDy;
      west = east;
      headWest = headEast;
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
  const here = ringRow(j) * stride - base;
  const below = ringRow(j - 1) * stride - base;
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
    let west = ut[bounds[2 * s] + below] + ut[bounds[2 * s] + here];
    let spinWest = spin[bounds[2 * s] + here];
    for (let k = bounds[2 * s]; k < end; k++) {
      const east = ut[k + below + 1] + ut[k + here + 1];
      const spinEast = spin[k + here + 1];
      const C = turn * (west + east);
      const P = (head[k + below] - head[k + here]) * perDy;
      const F = (spinEast - spinWest) * perDx;
      west = east;
      spinWest = spinEast;
      const S = stressRow[k - base];
      const v = now[k];
      const vN = keep * v + push * (P - C + F + S);
      next[k] = vN;
      const vB = 0.5 * (v + vN);
      const stretch = (divergence[k + here] - divergence[k + below]) * viscousPerDy;
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
  const here = ringRow(j) * stride - base;
  const above = ringRow(j + 1) * stride - base;
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
    let west = turnSouth * vt[bounds[2 * s] + here - 1] + turnNorth * vt[bounds[2 * s] + above - 1];
    let headWest = head[bounds[2 * s] + here - 1];
    for (let k = bounds[2 * s]; k < end; k++) {
      const east = turnSouth * vt[k + here] + turnNorth * vt[k + above];
      const headEast = head[k + here];
      const C = west + east;
      const P = (headWest - headEast) * perDx;
      const F = (spin[k + here] - spin[k + above]) * perDy;
      west = east;
      headWest = headEast;
      const S = stressRow[k - base];
      const u = now[k];
      const uN = keep * u + push * (P + C + F + S);
      next[k] = uN;
      const uB = 0.5 * (u + uN);
      const stretch = (divergence[k + here] - divergence[k + here - 1]) * viscousPerDx;
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

/**
 * Value that the last step used at n + ½ of a velocity at padded index k: E0 u(n) + E1 u(n − 1) + E2 u(n − 2). After a
 * step the free buffer still holds the oldest level, so this is the flux that changed η, to the last bit.
 */
export function lastHalfLevel(levels: Levels, k: number): number {
  return E0 * levels.previous[k] + E1 * levels.before[k] + E2 * levels.next[k];
}
