import { isWet } from '../../grid/grid';
import { H_PLANE, levelOffset, LINEAR_RING, ringRow, U_PLANE, V_PLANE, WEST } from '../layout';
import type { Model } from '../model';
import { NONE } from '../statics';

// Row sums of the step-level energy identity (numerics.md §9), made from what the row has just left in the ring. Every
// sum has two accumulators, for points at even and at odd distance from the first of their run (see sums.ts).

const pair = new Float64Array(12);
const total = new Float64Array(6);

/** Sums over the cells of row j, just stepped. */
export function cellSums(model: Model, j: number): void {
  const { data, layout, spans, statics, sums, phase } = model;
  const { bounds, rowStart } = spans.cells;
  const row = (j + 1) * layout.record + H_PLANE * layout.pitch;
  const now = levelOffset(layout, phase, 'now') + row;
  const next = levelOffset(layout, phase, 'next') + row;
  const divergence = ringRow(layout, LINEAR_RING.divergence, j);
  const sponge = statics.spongeCell !== NONE && statics.spongeRows[j] ? statics.spongeCell + j * layout.pitch : NONE;
  let [eta, squares, potential, spongeEta, spongeSquares] = [0, 0, 0, 0, 0];
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++) {
    pair.fill(0);
    const first = bounds[2 * s];
    for (let c = first; c < bounds[2 * s + 1]; c++) {
      const lane = 5 * ((c - first) & 1);
      const etaB = 0.5 * (data[now + c] + data[next + c]);
      pair[lane] += etaB;
      pair[lane + 1] += etaB * etaB;
      pair[lane + 2] += etaB * data[divergence + c];
      if (sponge === NONE) continue;
      const drained = data[sponge + c] * etaB;
      pair[lane + 3] += drained;
      pair[lane + 4] += drained * etaB;
    }
    eta += pair[0] + pair[5];
    squares += pair[1] + pair[6];
    potential += pair[2] + pair[7];
    spongeEta += pair[3] + pair[8];
    spongeSquares += pair[4] + pair[9];
  }
  const { terms } = sums;
  terms['eta'][j] = eta;
  terms['etaSquared'][j] = squares;
  terms['potential'][j] = potential;
  terms['spongeEta'][j] = spongeEta;
  terms['spongeEtaSquared'][j] = spongeSquares;
}

/** Sums over the v points of row j, just stepped. */
export function meridionalSums(model: Model, j: number): void {
  const { grid, data, layout, spans, rows, viscosity, stress, statics, sums, phase } = model;
  const { bounds, rowStart } = spans.vPoints;
  const ut = ringRow(layout, LINEAR_RING.ut, j);
  const utSouth = ringRow(layout, LINEAR_RING.ut, j - 1);
  const vt = ringRow(layout, LINEAR_RING.vt, j);
  const head = ringRow(layout, LINEAR_RING.head, j);
  const headSouth = ringRow(layout, LINEAR_RING.head, j - 1);
  const divergence = ringRow(layout, LINEAR_RING.divergence, j);
  const divergenceSouth = ringRow(layout, LINEAR_RING.divergence, j - 1);
  const spin = ringRow(layout, LINEAR_RING.spin, j);
  const row = (j + 1) * layout.record + V_PLANE * layout.pitch;
  const now = levelOffset(layout, phase, 'now') + row;
  const next = levelOffset(layout, phase, 'next') + row;
  const sponge = statics.spongeV !== NONE && statics.spongeRows[j] ? statics.spongeV + j * layout.pitch : NONE;
  const A = statics.viscosityCell === NONE ? NONE : statics.viscosityCell + j * layout.pitch;
  const turn = rows.coriolisV[j];
  const perDx = rows.perDxV[j];
  const perDy = 1 / grid.dy;
  total.fill(0);
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++) {
    pair.fill(0);
    const first = bounds[2 * s];
    for (let c = first; c < bounds[2 * s + 1]; c++) {
      const lane = 6 * ((c - first) & 1);
      const C = turn * (data[utSouth + c] + data[ut + c] + (data[utSouth + c + 1] + data[ut + c + 1]));
      const P = (data[headSouth + c] - data[head + c]) * perDy;
      const F = (data[spin + c + 1] - data[spin + c]) * perDx;
      const north = (A === NONE ? viscosity : data[A + c]) * data[divergence + c];
      const south = (A === NONE ? viscosity : data[A - layout.pitch + c]) * data[divergenceSouth + c];
      const stretch = (north - south) * perDy;
      const vB = 0.5 * (data[now + c] + data[next + c]);
      pair[lane] += vB * data[stress + c];
      pair[lane + 1] += vB * vB;
      pair[lane + 2] += vB * (F + stretch);
      pair[lane + 3] += vB * (P - C - stretch);
      pair[lane + 4] += data[vt + c];
      if (sponge !== NONE) pair[lane + 5] += data[sponge + c] * (vB * vB);
    }
    for (let k = 0; k < 6; k++) total[k] += pair[k] + pair[k + 6];
  }
  const { terms } = sums;
  [terms['windV'][j], terms['squareV'][j], terms['viscousV'][j], terms['kineticV'][j]] = total;
  sums.northward[j] = total[4];
  terms['spongeV'][j] = total[5];
}

/** Sums over the u points of row j, just stepped; eastward fluxes of the asked columns. */
export function zonalSums(model: Model, j: number): void {
  const { grid, data, layout, spans, rows, viscosity, stress, statics, sums, sumsPlace, phase } = model;
  const { bounds, rowStart } = spans.uPoints;
  const ut = ringRow(layout, LINEAR_RING.ut, j);
  const vt = ringRow(layout, LINEAR_RING.vt, j);
  const vtNorth = ringRow(layout, LINEAR_RING.vt, j + 1);
  const head = ringRow(layout, LINEAR_RING.head, j);
  const divergence = ringRow(layout, LINEAR_RING.divergence, j);
  const spin = ringRow(layout, LINEAR_RING.spin, j);
  const spinNorth = ringRow(layout, LINEAR_RING.spin, j + 1);
  const row = (j + 1) * layout.record + U_PLANE * layout.pitch;
  const now = levelOffset(layout, phase, 'now') + row;
  const next = levelOffset(layout, phase, 'next') + row;
  const sponge = statics.spongeU !== NONE && statics.spongeRows[j] ? statics.spongeU + j * layout.pitch : NONE;
  const A = statics.viscosityCell === NONE ? NONE : statics.viscosityCell + j * layout.pitch;
  const turnSouth = rows.coriolisSouth[j];
  const turnNorth = rows.coriolisNorth[j];
  const perDx = rows.perDxC[j];
  const perDy = 1 / grid.dy;
  total.fill(0);
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++) {
    pair.fill(0);
    const first = bounds[2 * s];
    for (let c = first; c < bounds[2 * s + 1]; c++) {
      const lane = 5 * ((c - first) & 1);
      const west = turnSouth * data[vt + c - 1] + turnNorth * data[vtNorth + c - 1];
      const C = west + (turnSouth * data[vt + c] + turnNorth * data[vtNorth + c]);
      const P = (data[head + c - 1] - data[head + c]) * perDx;
      const F = (data[spin + c] - data[spinNorth + c]) * perDy;
      const east = (A === NONE ? viscosity : data[A + c]) * data[divergence + c];
      const stretch = (east - (A === NONE ? viscosity : data[A + c - 1]) * data[divergence + c - 1]) * perDx;
      const uB = 0.5 * (data[now + c] + data[next + c]);
      pair[lane] += uB * data[stress + c];
      pair[lane + 1] += uB * uB;
      pair[lane + 2] += uB * (F + stretch);
      pair[lane + 3] += uB * (P + C - stretch);
      if (sponge !== NONE) pair[lane + 4] += data[sponge + c] * (uB * uB);
    }
    for (let k = 0; k < 5; k++) total[k] += pair[k] + pair[k + 5];
  }
  const { terms } = sums;
  [terms['windU'][j], terms['squareU'][j], terms['viscousU'][j], terms['kineticU'][j], terms['spongeU'][j]] = total;
  sumsPlace.meridians.forEach((column, k) => {
    const open = isWet(grid, column - 1, j) && isWet(grid, column, j);
    sums.eastward[k][j] = open ? data[ut + WEST + column] : 0;
  });
}
