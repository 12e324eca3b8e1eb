import { isWet } from '../../grid/grid';
import { H_PLANE, NONLINEAR_RING as RING, ringRow, U_PLANE, V_PLANE, WEST } from '../layout';
import type { Model } from '../model';
import { levelRow } from '../rows';
import { isDry } from '../spans';
import { NONE } from '../statics';

/*
 * Row sums of the step-level energy identity of the nonlinear scheme, derived for this project. With m̄ = (m(n) + m(n + 1))/2,
 *   ½ Δ(h_u u²) = h̄_u ū Δu + k̄ Δh_u,   k̄ = (u(n)² + u(n + 1)²)/4,
 * and since h_u and h_v are means of cells, Σ A_u k̄ Δh_u + Σ A_v k̄ Δh_v = Σ A_c K̄ Δh with K̄ = ½ (k̄_W + k̄_E + k̄_S + k̄_N); and
 * ½ g′ Δ(η²) = g′ η̄ Δη. So with B = g′ η̄ + K̄, Δh = dt (−O − (κ + κ_s) η̄ + w_e − w_d) and Δu = dt (turning − grad + viscosity +
 * wind − (r + r_s + w_e/h) ū) every term of the energy is a sum below; none is found as what is left over.
 */

const SUMS = 9;
const pair = new Float64Array(2 * SUMS);
const total = new Float64Array(SUMS);

function addPairs(): void {
  for (let k = 0; k < SUMS; k++) total[k] += pair[k] + pair[k + SUMS];
}

/** Sums over the cells of row j; the velocities of the new level around them are there. */
export function cellSums(model: Model, j: number, detrained: number): void {
  const { data, layout, spans, statics, sums, reducedGravity, restThickness } = model;
  const { bounds, rowStart } = spans.cells;
  const u0 = levelRow(model, 'now', U_PLANE, j);
  const uN = levelRow(model, 'next', U_PLANE, j);
  const v0 = levelRow(model, 'now', V_PLANE, j);
  const vN = levelRow(model, 'next', V_PLANE, j);
  const h0 = levelRow(model, 'now', H_PLANE, j);
  const hN = levelRow(model, 'next', H_PLANE, j);
  const { record } = layout;
  const outflow = ringRow(layout, RING.outflow, j);
  const entrained = ringRow(layout, RING.entrained, j);
  const sponge = statics.spongeCell !== NONE && statics.spongeRows[j] ? statics.spongeCell + j * layout.pitch : NONE;
  const k = (now: number, next: number) => data[now] * data[now] + data[next] * data[next];
  total.fill(0);
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++) {
    pair.fill(0);
    const first = bounds[2 * s];
    for (let c = first; c < bounds[2 * s + 1]; c++) {
      const lane = SUMS * ((c - first) & 1);
      const zonal = k(u0 + c, uN + c) + k(u0 + c + 1, uN + c + 1);
      const meridional = k(v0 + c, vN + c) + k(v0 + record + c, vN + record + c);
      const eta = 0.5 * (data[h0 + c] - restThickness + (data[hN + c] - restThickness));
      const B = reducedGravity * eta + 0.125 * (zonal + meridional);
      pair[lane] += eta;
      pair[lane + 1] += B;
      pair[lane + 2] += B * data[outflow + c];
      pair[lane + 3] += B * eta;
      pair[lane + 4] += data[entrained + c];
      pair[lane + 5] += B * data[entrained + c];
      if (sponge === NONE) continue;
      const drained = data[sponge + c] * eta;
      pair[lane + 6] += drained;
      pair[lane + 7] += B * drained;
    }
    addPairs();
  }
  const { terms } = sums;
  terms['eta'][j] = total[0];
  terms['bernoulli'][j] = total[1];
  terms['bernoulliOutflow'][j] = total[2];
  terms['bernoulliEta'][j] = total[3];
  terms['entrained'][j] = total[4];
  terms['bernoulliEntrained'][j] = total[5];
  terms['spongeEta'][j] = total[6];
  terms['bernoulliSpongeEta'][j] = total[7];
  terms['detrained'][j] = detrained;
}

/** Sums over the v points of row j, just stepped, and the northward flux. */
export function meridionalSums(model: Model, j: number): void {
  const { grid, data, layout, spans, rows, viscosity, stress, stressFloor, statics, sums, entrainment } = model;
  const { bounds, rowStart } = spans.vPoints;
  const ht = ringRow(layout, RING.ht, j);
  const htSouth = ringRow(layout, RING.ht, j - 1);
  const head = ringRow(layout, RING.head, j);
  const headSouth = ringRow(layout, RING.head, j - 1);
  const spin = ringRow(layout, RING.spin, j);
  const turnV = ringRow(layout, RING.turnV, j);
  const fluxV = ringRow(layout, RING.fluxV, j);
  const divergence = ringRow(layout, RING.divergence, j);
  const divergenceSouth = ringRow(layout, RING.divergence, j - 1);
  const entrained = ringRow(layout, RING.entrained, j);
  const entrainedSouth = ringRow(layout, RING.entrained, j - 1);
  const now = levelRow(model, 'now', V_PLANE, j);
  const next = levelRow(model, 'next', V_PLANE, j);
  const h0 = levelRow(model, 'now', H_PLANE, j);
  const hN = levelRow(model, 'next', H_PLANE, j);
  const { record } = layout;
  const sponge = statics.spongeV !== NONE && statics.spongeRows[j] ? statics.spongeV + j * layout.pitch : NONE;
  const A = statics.viscosityCell === NONE ? NONE : statics.viscosityCell + j * layout.pitch;
  const south = 0.5 * rows.shareSouth[j];
  const north = 0.5 * rows.shareNorth[j];
  const perDx = rows.perDxV[j];
  const perDy = 1 / grid.dy;
  total.fill(0);
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++) {
    pair.fill(0);
    const first = bounds[2 * s];
    for (let c = first; c < bounds[2 * s + 1]; c++) {
      const lane = SUMS * ((c - first) & 1);
      const hv = south * data[htSouth + c] + north * data[ht + c];
      const C = 0.25 * (data[turnV + c] + data[turnV + c + 1]);
      const P = (data[headSouth + c] - data[head + c]) * perDy;
      const F = (data[spin + c + 1] - data[spin + c]) * perDx;
      const S = data[stress + c] / Math.max(hv, stressFloor);
      const stretchNorth = (A === NONE ? viscosity : data[A + c]) * data[divergence + c];
      const stretchSouth = (A === NONE ? viscosity : data[A - layout.pitch + c]) * data[divergenceSouth + c];
      const stretch = (stretchNorth - stretchSouth) * perDy;
      const mass =
        0.5 * (south * (data[h0 - record + c] + data[hN - record + c]) + north * (data[h0 + c] + data[hN + c]));
      const vB = 0.5 * (data[now + c] + data[next + c]);
      const momentum = mass * vB;
      pair[lane] += momentum * S;
      pair[lane + 1] += momentum * vB;
      pair[lane + 2] += momentum * (F + stretch);
      pair[lane + 3] += momentum * (P - C - stretch);
      pair[lane + 4] += data[fluxV + c];
      if (entrainment)
        pair[lane + 5] += momentum * vB * ((south * data[entrainedSouth + c] + north * data[entrained + c]) / hv);
      if (sponge !== NONE) pair[lane + 6] += momentum * vB * data[sponge + c];
    }
    addPairs();
  }
  const { terms } = sums;
  [terms['windV'][j], terms['squareV'][j], terms['viscousV'][j], terms['kineticV'][j]] = total;
  sums.northward[j] = total[4];
  terms['dilutedV'][j] = total[5];
  terms['spongeV'][j] = total[6];
}

/** Sums over the u points of row j, just stepped, and the eastward fluxes of the asked columns. */
export function zonalSums(model: Model, j: number): void {
  const { grid, data, layout, spans, rows, viscosity, stress, stressFloor, statics, sums, sumsPlace, entrainment } =
    model;
  const { bounds, rowStart } = spans.uPoints;
  const ht = ringRow(layout, RING.ht, j);
  const head = ringRow(layout, RING.head, j);
  const spin = ringRow(layout, RING.spin, j);
  const spinNorth = ringRow(layout, RING.spin, j + 1);
  const turnU = ringRow(layout, RING.turnU, j);
  const turnUNorth = ringRow(layout, RING.turnU, j + 1);
  const fluxU = ringRow(layout, RING.fluxU, j);
  const divergence = ringRow(layout, RING.divergence, j);
  const entrained = ringRow(layout, RING.entrained, j);
  const now = levelRow(model, 'now', U_PLANE, j);
  const next = levelRow(model, 'next', U_PLANE, j);
  const h0 = levelRow(model, 'now', H_PLANE, j);
  const hN = levelRow(model, 'next', H_PLANE, j);
  const sponge = statics.spongeU !== NONE && statics.spongeRows[j] ? statics.spongeU + j * layout.pitch : NONE;
  const A = statics.viscosityCell === NONE ? NONE : statics.viscosityCell + j * layout.pitch;
  const turnSouth = rows.turnSouth[j];
  const turnNorth = rows.turnNorth[j];
  const perDx = rows.perDxC[j];
  const perDy = 1 / grid.dy;
  total.fill(0);
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++) {
    pair.fill(0);
    const first = bounds[2 * s];
    for (let c = first; c < bounds[2 * s + 1]; c++) {
      const lane = SUMS * ((c - first) & 1);
      const hu = 0.5 * (data[ht + c - 1] + data[ht + c]);
      const C = turnSouth * data[turnU + c] + turnNorth * data[turnUNorth + c];
      const P = (data[head + c - 1] - data[head + c]) * perDx;
      const F = (data[spin + c] - data[spinNorth + c]) * perDy;
      const S = data[stress + c] / Math.max(hu, stressFloor);
      const east = (A === NONE ? viscosity : data[A + c]) * data[divergence + c];
      const stretch = (east - (A === NONE ? viscosity : data[A + c - 1]) * data[divergence + c - 1]) * perDx;
      const mass = 0.25 * (data[h0 + c - 1] + data[hN + c - 1] + (data[h0 + c] + data[hN + c]));
      const uB = 0.5 * (data[now + c] + data[next + c]);
      const momentum = mass * uB;
      pair[lane] += momentum * S;
      pair[lane + 1] += momentum * uB;
      pair[lane + 2] += momentum * (F + stretch);
      pair[lane + 3] += momentum * (P + C - stretch);
      if (entrainment) pair[lane + 4] += momentum * uB * ((0.5 * (data[entrained + c - 1] + data[entrained + c])) / hu);
      if (sponge !== NONE) pair[lane + 5] += momentum * uB * data[sponge + c];
    }
    addPairs();
  }
  const { terms } = sums;
  [terms['windU'][j], terms['squareU'][j], terms['viscousU'][j], terms['kineticU'][j]] = total;
  terms['dilutedU'][j] = total[4];
  terms['spongeU'][j] = total[5];
  const dry = isDry(spans.uPoints, j);
  sumsPlace.meridians.forEach((column, k) => {
    const open = !dry && isWet(grid, column - 1, j) && isWet(grid, column, j);
    sums.eastward[k][j] = open ? data[fluxU + WEST + column] : 0;
  });
}
