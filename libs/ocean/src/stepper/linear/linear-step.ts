import { E0, E1, E2, P0, P1, PM1, PM2 } from '../coefficients';
import { H_PLANE, LINEAR_RING, ringRow, U_PLANE, V_PLANE, WEST } from '../layout';
import type { Model } from '../model';
import { bareRow, brakeRow, clearRing, levelRow, wrapRow } from '../rows';
import { isDry } from '../spans';
import { NONE } from '../statics';
import { stressOfRow } from '../stress';
import { cellSums, meridionalSums, zonalSums } from './linear-sums';

/**
 * One step of the linear equations by the generalised forward-backward scheme (numerics.md §4). One sweep over rows:
 * row j of (ut, vt, η, pressure, ζ), then v row j, then u row j − 1. What a step makes on the way lives in a ring of four
 * rows that stays in the innermost cache. Dry rows, and dry stretches of rows, are never touched. The order of every
 * expression is fixed; with `sums` the step's row sums are added up from what it made, after each row.
 */
export function linearStep(model: Model, sums: boolean): void {
  const { ny } = model.grid;
  model.forcing.factors(model.step, model.factors);
  // Beyond the walls nothing moves, and nothing moves through them.
  clearRing(model, LINEAR_RING.ut, -1);
  clearRing(model, LINEAR_RING.vt, 0);
  for (let j = 0; j <= ny; j++) {
    if (j < ny) {
      continuityRow(model, j);
      if (sums) cellSums(model, j);
    } else clearRing(model, LINEAR_RING.ut, ny);
    spinRow(model, j);
    if (j > 0 && j < ny) {
      meridionalRow(model, j);
      if (sums) meridionalSums(model, j);
    }
    if (j > 0) {
      zonalRow(model, j - 1);
      if (sums) zonalSums(model, j - 1);
    }
  }
  model.phase = (model.phase + 1) & 3;
  model.step += 1;
}

/**
 * Steps 1 to 4 of §4 on one row: u of this row and v of the next at n + ½, then η and the pressure. Land needs no
 * exception: all faces of a land cell stand still, so its η stays 0.
 */
function continuityRow(model: Model, j: number): void {
  const { grid, data, layout, spans, rows, dt, damping, reducedGravity, restThickness, viscosity, statics } = model;
  bareRow(model, LINEAR_RING.vt, j);
  if (isDry(spans.sweep, j)) return;
  const { bounds, rowStart } = spans.sweep;
  const ut = ringRow(layout, LINEAR_RING.ut, j);
  const vtSouth = ringRow(layout, LINEAR_RING.vt, j);
  const vt = ringRow(layout, LINEAR_RING.vt, j + 1);
  const divergence = ringRow(layout, LINEAR_RING.divergence, j);
  const head = ringRow(layout, LINEAR_RING.head, j);
  const u0 = levelRow(model, 'now', U_PLANE, j);
  const u1 = levelRow(model, 'previous', U_PLANE, j);
  const u2 = levelRow(model, 'before', U_PLANE, j);
  const v0 = levelRow(model, 'now', V_PLANE, j + 1);
  const v1 = levelRow(model, 'previous', V_PLANE, j + 1);
  const v2 = levelRow(model, 'before', V_PLANE, j + 1);
  const h0 = levelRow(model, 'now', H_PLANE, j);
  const h1 = levelRow(model, 'previous', H_PLANE, j);
  const h2 = levelRow(model, 'before', H_PLANE, j);
  const hN = levelRow(model, 'next', H_PLANE, j);
  const keep = (1 - 0.5 * damping * dt) / (1 + 0.5 * damping * dt);
  const drain = (dt * restThickness) / (1 + 0.5 * damping * dt);
  const perDx = rows.perDxC[j];
  const north = rows.divNorth[j];
  const south = rows.divSouth[j];
  const w1 = reducedGravity * P1;
  const w0 = reducedGravity * P0;
  const wm1 = reducedGravity * PM1;
  const wm2 = reducedGravity * PM2;
  const A = statics.viscosityCell === NONE ? viscosity : 0;
  for (const c of [WEST - 1, WEST + grid.nx]) data[vt + c] = E0 * data[v0 + c] + E1 * data[v1 + c] + E2 * data[v2 + c];
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++) {
    const first = bounds[2 * s];
    const end = bounds[2 * s + 1];
    let west = E0 * data[u0 + first] + E1 * data[u1 + first] + E2 * data[u2 + first];
    data[ut + first] = west;
    for (let c = first; c < end; c++) {
      const east = E0 * data[u0 + c + 1] + E1 * data[u1 + c + 1] + E2 * data[u2 + c + 1];
      data[ut + c + 1] = east;
      const v = E0 * data[v0 + c] + E1 * data[v1 + c] + E2 * data[v2 + c];
      data[vt + c] = v;
      const D = (east - west) * perDx + (v * north - data[vtSouth + c] * south);
      west = east;
      const eta = data[h0 + c];
      const etaN = keep * eta - drain * D;
      data[hN + c] = etaN;
      data[divergence + c] = D;
      data[head + c] = w1 * etaN + w0 * eta + (wm1 * data[h1 + c] + wm2 * data[h2 + c]) - A * D;
    }
  }
  if (statics.spongeCell !== NONE && statics.spongeRows[j]) dampedCells(model, j);
  if (statics.viscosityCell !== NONE) viscousHead(model, j);
  if (grid.periodic) for (const row of [hN, head, divergence]) wrapRow(data, row, grid.nx);
}

/** η and pressure again where the damping varies along the row: κ + κ_s takes the place of κ. */
function dampedCells(model: Model, j: number): void {
  const { data, layout, spans, dt, damping, reducedGravity, restThickness, viscosity, statics } = model;
  const { bounds, rowStart } = spans.cells;
  const divergence = ringRow(layout, LINEAR_RING.divergence, j);
  const head = ringRow(layout, LINEAR_RING.head, j);
  const h0 = levelRow(model, 'now', H_PLANE, j);
  const h1 = levelRow(model, 'previous', H_PLANE, j);
  const h2 = levelRow(model, 'before', H_PLANE, j);
  const hN = levelRow(model, 'next', H_PLANE, j);
  const rate = statics.spongeCell + j * layout.pitch;
  const w1 = reducedGravity * P1;
  const w0 = reducedGravity * P0;
  const wm1 = reducedGravity * PM1;
  const wm2 = reducedGravity * PM2;
  const A = statics.viscosityCell === NONE ? viscosity : 0;
  const half = 0.5 * dt;
  const full = dt * restThickness;
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++)
    for (let c = bounds[2 * s]; c < bounds[2 * s + 1]; c++) {
      const k = half * (damping + data[rate + c]);
      const D = data[divergence + c];
      const eta = data[h0 + c];
      const etaN = ((1 - k) * eta - full * D) / (1 + k);
      data[hN + c] = etaN;
      data[head + c] = w1 * etaN + w0 * eta + (wm1 * data[h1 + c] + wm2 * data[h2 + c]) - A * D;
    }
}

/** Takes A D from the pressure where A varies: the row was made with A = 0. */
function viscousHead(model: Model, j: number): void {
  const { data, layout, spans, statics } = model;
  const { bounds, rowStart } = spans.cells;
  const divergence = ringRow(layout, LINEAR_RING.divergence, j);
  const head = ringRow(layout, LINEAR_RING.head, j);
  const A = statics.viscosityCell + j * layout.pitch;
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++)
    for (let c = bounds[2 * s]; c < bounds[2 * s + 1]; c++) data[head + c] -= data[A + c] * data[divergence + c];
}

/** A s ζ at corner row j: the viscosity times ζ, with the slip factor put on the corners that touch land. */
function spinRow(model: Model, j: number): void {
  const { data, layout, spans, viscosity, rows, coastCorners, statics } = model;
  const varies = statics.viscosityCorner !== NONE;
  if ((viscosity === 0 && !varies) || isDry(spans.corners, j)) return;
  const ut = ringRow(layout, LINEAR_RING.ut, j);
  const utSouth = ringRow(layout, LINEAR_RING.ut, j - 1);
  const vt = ringRow(layout, LINEAR_RING.vt, j);
  const spin = ringRow(layout, LINEAR_RING.spin, j);
  const perDx = rows.perDxV[j];
  const north = rows.curlNorth[j];
  const south = rows.curlSouth[j];
  const A = statics.viscosityCorner + j * layout.pitch;
  const { bounds, rowStart } = spans.corners;
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++) {
    const end = bounds[2 * s + 1];
    let west = data[vt + bounds[2 * s] - 1];
    for (let c = bounds[2 * s]; c < end; c++) {
      const east = data[vt + c];
      const zeta = (east - west) * perDx - (data[ut + c] * north - data[utSouth + c] * south);
      data[spin + c] = (varies ? data[A + c] : viscosity) * zeta;
      west = east;
    }
  }
  const slip = model.slip === 'free' ? 0 : 2;
  for (let k = coastCorners.rowStart[j]; k < coastCorners.rowStart[j + 1]; k++)
    data[spin + coastCorners.columns[k]] *= slip;
}

function meridionalRow(model: Model, j: number): void {
  const { grid, data, layout, spans, rows, dt, rayleigh, density, restThickness, stress, statics } = model;
  if (isDry(spans.vPoints, j)) return;
  stressOfRow(model, j, 'y', 1 / (density * restThickness));
  const ut = ringRow(layout, LINEAR_RING.ut, j);
  const utSouth = ringRow(layout, LINEAR_RING.ut, j - 1);
  const head = ringRow(layout, LINEAR_RING.head, j);
  const headSouth = ringRow(layout, LINEAR_RING.head, j - 1);
  const spin = ringRow(layout, LINEAR_RING.spin, j);
  const now = levelRow(model, 'now', V_PLANE, j);
  const next = levelRow(model, 'next', V_PLANE, j);
  const varies = statics.spongeV !== NONE && statics.spongeRows[j] === 1;
  const keep = (1 - 0.5 * rayleigh * dt) / (1 + 0.5 * rayleigh * dt);
  const push = dt / (1 + 0.5 * rayleigh * dt);
  const turn = rows.coriolisV[j];
  const perDx = rows.perDxV[j];
  const perDy = 1 / grid.dy;
  const { bounds, rowStart } = spans.vPoints;
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++) {
    const first = bounds[2 * s];
    const end = bounds[2 * s + 1];
    let west = data[utSouth + first] + data[ut + first];
    let spinWest = data[spin + first];
    for (let c = first; c < end; c++) {
      const east = data[utSouth + c + 1] + data[ut + c + 1];
      const spinEast = data[spin + c + 1];
      const C = turn * (west + east);
      const P = (data[headSouth + c] - data[head + c]) * perDy;
      const F = (spinEast - spinWest) * perDx;
      west = east;
      spinWest = spinEast;
      const G = P - C + F + data[stress + c];
      data[next + c] = varies ? G : keep * data[now + c] + push * G;
    }
  }
  if (varies) brakeRow(model, statics.spongeV + j * layout.pitch, now, next, spans.vPoints, j);
  if (grid.periodic) wrapRow(data, next, grid.nx);
}

function zonalRow(model: Model, j: number): void {
  const { grid, data, layout, spans, rows, dt, rayleigh, density, restThickness, stress, statics } = model;
  if (isDry(spans.uPoints, j)) return;
  stressOfRow(model, j, 'x', 1 / (density * restThickness));
  const vt = ringRow(layout, LINEAR_RING.vt, j);
  const vtNorth = ringRow(layout, LINEAR_RING.vt, j + 1);
  const head = ringRow(layout, LINEAR_RING.head, j);
  const spin = ringRow(layout, LINEAR_RING.spin, j);
  const spinNorth = ringRow(layout, LINEAR_RING.spin, j + 1);
  const now = levelRow(model, 'now', U_PLANE, j);
  const next = levelRow(model, 'next', U_PLANE, j);
  const varies = statics.spongeU !== NONE && statics.spongeRows[j] === 1;
  const keep = (1 - 0.5 * rayleigh * dt) / (1 + 0.5 * rayleigh * dt);
  const push = dt / (1 + 0.5 * rayleigh * dt);
  const turnSouth = rows.coriolisSouth[j];
  const turnNorth = rows.coriolisNorth[j];
  const perDx = rows.perDxC[j];
  const perDy = 1 / grid.dy;
  const { bounds, rowStart } = spans.uPoints;
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++) {
    const first = bounds[2 * s];
    const end = bounds[2 * s + 1];
    let west = turnSouth * data[vt + first - 1] + turnNorth * data[vtNorth + first - 1];
    let headWest = data[head + first - 1];
    for (let c = first; c < end; c++) {
      const east = turnSouth * data[vt + c] + turnNorth * data[vtNorth + c];
      const headEast = data[head + c];
      const C = west + east;
      const P = (headWest - headEast) * perDx;
      const F = (data[spin + c] - data[spinNorth + c]) * perDy;
      west = east;
      headWest = headEast;
      const G = P + C + F + data[stress + c];
      data[next + c] = varies ? G : keep * data[now + c] + push * G;
    }
  }
  if (varies) brakeRow(model, statics.spongeU + j * layout.pitch, now, next, spans.uPoints, j);
  if (grid.periodic) wrapRow(data, next, grid.nx);
}
