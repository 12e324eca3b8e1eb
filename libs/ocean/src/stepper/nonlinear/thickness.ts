import { P0, P1, PM1, PM2 } from '../coefficients';
import { H_PLANE, NONLINEAR_RING as RING, ringRow } from '../layout';
import type { Model } from '../model';
import { levelRow, wrapRow } from '../rows';
import { NONE } from '../statics';

/**
 * Steps 3 and 4 of numerics.md §4 on the water cells of row j: h(n + 1) from the limited fluxes, κ, sponges and
 * entrainment, written as what is added to h (the same as (1 − κ dt/2) h + …, but its rounding is that of the change and
 * adds up to nothing), then the Bernoulli head g′p + K − A D. K = ¼ (u_W² + u_E² + v_S² + v_N²) is what the derivative of the
 * kinetic energy ½ (A_u h_u u² + A_v h_v v²) by h gives with h_v = ½ (A_S h_S + A_N h_N)/A_v, on a sphere too.
 */
export function thicknessRow(model: Model, j: number, detrained: number): void {
  const { grid, data, layout, spans, rows, dt, damping, reducedGravity, restThickness, viscosity, statics } = model;
  const { bounds, rowStart } = spans.cells;
  const ut = ringRow(layout, RING.ut, j);
  const vt = ringRow(layout, RING.vt, j);
  const vtNorth = ringRow(layout, RING.vt, j + 1);
  const fluxU = ringRow(layout, RING.fluxU, j);
  const fluxV = ringRow(layout, RING.fluxV, j);
  const fluxNorth = ringRow(layout, RING.fluxV, j + 1);
  const entrained = ringRow(layout, RING.entrained, j);
  const divergence = ringRow(layout, RING.divergence, j);
  const outflow = ringRow(layout, RING.outflow, j);
  const head = ringRow(layout, RING.head, j);
  const h0 = levelRow(model, 'now', H_PLANE, j);
  const h1 = levelRow(model, 'previous', H_PLANE, j);
  const h2 = levelRow(model, 'before', H_PLANE, j);
  const hN = levelRow(model, 'next', H_PLANE, j);
  const sponge = statics.spongeCell !== NONE && statics.spongeRows[j] ? statics.spongeCell + j * layout.pitch : NONE;
  const A = statics.viscosityCell === NONE ? NONE : statics.viscosityCell + j * layout.pitch;
  const perDx = rows.perDxC[j];
  const north = rows.divNorth[j];
  const south = rows.divSouth[j];
  const half = 0.5 * dt;
  const push = dt / (1 + half * damping);
  const w1 = reducedGravity * P1;
  const w0 = reducedGravity * P0;
  const wm1 = reducedGravity * PM1;
  const wm2 = reducedGravity * PM2;
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++)
    for (let c = bounds[2 * s]; c < bounds[2 * s + 1]; c++) {
      const [uW, uE, vS, vN] = [data[ut + c], data[ut + c + 1], data[vt + c], data[vtNorth + c]];
      const D = (uE - uW) * perDx + (vN * north - vS * south);
      const O =
        (data[fluxU + c + 1] - data[fluxU + c]) * perDx + (data[fluxNorth + c] * north - data[fluxV + c] * south);
      const K = 0.25 * (uW * uW + uE * uE + (vS * vS + vN * vN));
      const h = data[h0 + c];
      let next: number;
      if (sponge === NONE) next = h + push * (damping * (restThickness - h) - detrained + data[entrained + c] - O);
      else {
        const rate = damping + data[sponge + c];
        const k = half * rate;
        next = h + (dt * (rate * (restThickness - h) - detrained + data[entrained + c] - O)) / (1 + k);
      }
      data[hN + c] = next;
      data[divergence + c] = D;
      data[outflow + c] = O;
      const drag = (A === NONE ? viscosity : data[A + c]) * D;
      data[head + c] = w1 * next + w0 * h + (wm1 * data[h1 + c] + wm2 * data[h2 + c]) + K - drag;
    }
  if (grid.periodic) for (const row of [hN, head, divergence]) wrapRow(data, row, grid.nx);
}
