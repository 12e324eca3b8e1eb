import { NONLINEAR_RING as RING, ringRow, U_PLANE, V_PLANE } from '../layout';
import type { Model } from '../model';
import { brakeRow, levelRow, wrapRow } from '../rows';
import { isDry } from '../spans';
import { NONE } from '../statics';
import { stressOfRow } from '../stress';

// Steps 5 to 7 of numerics.md §4: G = turning − grad(g′p + K − A D) + curl part of the viscosity + τ/(ρ0 max(h, h_s)), then
// Crank–Nicolson drag at r + sponge + w_e/h: entrained water carries no momentum (§6).

/** v(n + 1) on row j. */
export function meridionalRow(model: Model, j: number): void {
  const { grid, data, layout, spans, rows, dt, rayleigh, density, stress, stressFloor, statics, entrainment } = model;
  if (isDry(spans.vPoints, j)) return;
  stressOfRow(model, j, 'y', 1 / density);
  const ht = ringRow(layout, RING.ht, j);
  const htSouth = ringRow(layout, RING.ht, j - 1);
  const head = ringRow(layout, RING.head, j);
  const headSouth = ringRow(layout, RING.head, j - 1);
  const spin = ringRow(layout, RING.spin, j);
  const turnV = ringRow(layout, RING.turnV, j);
  const entrained = ringRow(layout, RING.entrained, j);
  const entrainedSouth = ringRow(layout, RING.entrained, j - 1);
  const brake = ringRow(layout, RING.brakeV, j);
  const now = levelRow(model, 'now', V_PLANE, j);
  const next = levelRow(model, 'next', V_PLANE, j);
  const sponge = statics.spongeV !== NONE && statics.spongeRows[j] ? statics.spongeV + j * layout.pitch : NONE;
  const varies = sponge !== NONE || entrainment !== null;
  const keep = (1 - 0.5 * rayleigh * dt) / (1 + 0.5 * rayleigh * dt);
  const push = dt / (1 + 0.5 * rayleigh * dt);
  const south = 0.5 * rows.shareSouth[j];
  const north = 0.5 * rows.shareNorth[j];
  const perDx = rows.perDxV[j];
  const perDy = 1 / grid.dy;
  const { bounds, rowStart } = spans.vPoints;
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++)
    for (let c = bounds[2 * s]; c < bounds[2 * s + 1]; c++) {
      const hv = south * data[htSouth + c] + north * data[ht + c];
      const C = 0.25 * (data[turnV + c] + data[turnV + c + 1]);
      const P = (data[headSouth + c] - data[head + c]) * perDy;
      const F = (data[spin + c + 1] - data[spin + c]) * perDx;
      const G = P - C + F + data[stress + c] / Math.max(hv, stressFloor);
      data[next + c] = varies ? G : keep * data[now + c] + push * G;
      if (!varies) continue;
      const diluted = entrainment ? (south * data[entrainedSouth + c] + north * data[entrained + c]) / hv : 0;
      data[brake + c] = diluted + (sponge === NONE ? 0 : data[sponge + c]);
    }
  if (varies) brakeRow(model, brake, now, next, spans.vPoints, j);
  if (grid.periodic) wrapRow(data, next, grid.nx);
}

/** u(n + 1) on row j. */
export function zonalRow(model: Model, j: number): void {
  const { grid, data, layout, spans, rows, dt, rayleigh, density, stress, stressFloor, statics, entrainment } = model;
  if (isDry(spans.uPoints, j)) return;
  stressOfRow(model, j, 'x', 1 / density);
  const ht = ringRow(layout, RING.ht, j);
  const head = ringRow(layout, RING.head, j);
  const spin = ringRow(layout, RING.spin, j);
  const spinNorth = ringRow(layout, RING.spin, j + 1);
  const turnU = ringRow(layout, RING.turnU, j);
  const turnUNorth = ringRow(layout, RING.turnU, j + 1);
  const entrained = ringRow(layout, RING.entrained, j);
  const brake = ringRow(layout, RING.brakeU, j);
  const now = levelRow(model, 'now', U_PLANE, j);
  const next = levelRow(model, 'next', U_PLANE, j);
  const sponge = statics.spongeU !== NONE && statics.spongeRows[j] ? statics.spongeU + j * layout.pitch : NONE;
  const varies = sponge !== NONE || entrainment !== null;
  const keep = (1 - 0.5 * rayleigh * dt) / (1 + 0.5 * rayleigh * dt);
  const push = dt / (1 + 0.5 * rayleigh * dt);
  const turnSouth = rows.turnSouth[j];
  const turnNorth = rows.turnNorth[j];
  const perDx = rows.perDxC[j];
  const perDy = 1 / grid.dy;
  const { bounds, rowStart } = spans.uPoints;
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++)
    for (let c = bounds[2 * s]; c < bounds[2 * s + 1]; c++) {
      const hu = 0.5 * (data[ht + c - 1] + data[ht + c]);
      const C = turnSouth * data[turnU + c] + turnNorth * data[turnUNorth + c];
      const P = (data[head + c - 1] - data[head + c]) * perDx;
      const F = (data[spin + c] - data[spinNorth + c]) * perDy;
      const G = P + C + F + data[stress + c] / Math.max(hu, stressFloor);
      data[next + c] = varies ? G : keep * data[now + c] + push * G;
      if (!varies) continue;
      const diluted = entrainment ? (0.5 * (data[entrained + c - 1] + data[entrained + c])) / hu : 0;
      data[brake + c] = diluted + (sponge === NONE ? 0 : data[sponge + c]);
    }
  if (varies) brakeRow(model, brake, now, next, spans.uPoints, j);
  if (grid.periodic) wrapRow(data, next, grid.nx);
}
