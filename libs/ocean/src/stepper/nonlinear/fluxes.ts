import { H_PLANE, NONLINEAR_RING as RING, ringRow, WEST } from '../layout';
import type { Model } from '../model';
import { levelRow, wrapRow } from '../rows';
import { isDry } from '../spans';

// Fluxes of the layer and what keeps it from running dry: numerics.md §3 and §6; a flux-limited scheme after the idea of
// Zalesak (1979), derived for this project. All fluxes are per metre of the face, m²/s.

/** U = ut h_u on row j, h_u = ½ (h_W + h_E). */
export function zonalFluxRow(model: Model, j: number): void {
  const { data, layout, spans } = model;
  if (isDry(spans.sweep, j)) return;
  const { bounds, rowStart } = spans.sweep;
  const ut = ringRow(layout, RING.ut, j);
  const ht = ringRow(layout, RING.ht, j);
  const fluxU = ringRow(layout, RING.fluxU, j);
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++)
    for (let c = bounds[2 * s]; c <= bounds[2 * s + 1]; c++)
      data[fluxU + c] = data[ut + c] * (0.5 * (data[ht + c - 1] + data[ht + c]));
}

/** V = vt h_v on row j, h_v = ½ (A_S h_S + A_N h_N)/A_v; every column that a corner of row j reads. */
export function meridionalFluxRow(model: Model, j: number): void {
  const { grid, data, layout, spans, rows } = model;
  if (isDry(spans.corners, j)) return;
  const { bounds, rowStart } = spans.corners;
  const vt = ringRow(layout, RING.vt, j);
  const ht = ringRow(layout, RING.ht, j);
  const htSouth = ringRow(layout, RING.ht, j - 1);
  const fluxV = ringRow(layout, RING.fluxV, j);
  const south = 0.5 * rows.shareSouth[j];
  const north = 0.5 * rows.shareNorth[j];
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++) {
    const end = Math.min(bounds[2 * s + 1], WEST + grid.nx);
    for (let c = Math.max(bounds[2 * s] - 1, WEST); c < end; c++)
      data[fluxV + c] = data[vt + c] * (south * data[htSouth + c] + north * data[ht + c]);
  }
  if (grid.periodic) wrapRow(data, fluxV, grid.nx);
}

/**
 * R of the cells of row j: the share of a cell's outflow that it can give in this step without falling below hmin,
 * min(1, max(h − hmin, 0)/(dt · outflow)). With `sums` the cells with R < 1 are counted.
 */
export function limitRow(model: Model, j: number, sums: boolean): void {
  const { grid, data, layout, spans, rows, dt, minimumThickness } = model;
  const { bounds, rowStart } = spans.cells;
  const fluxU = ringRow(layout, RING.fluxU, j);
  const fluxV = ringRow(layout, RING.fluxV, j);
  const fluxNorth = ringRow(layout, RING.fluxV, j + 1);
  const limit = ringRow(layout, RING.limit, j);
  const h = levelRow(model, 'now', H_PLANE, j);
  const perDx = rows.perDxC[j];
  const north = rows.divNorth[j];
  const south = rows.divSouth[j];
  const perDt = 1 / dt;
  let limited = 0;
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++)
    for (let c = bounds[2 * s]; c < bounds[2 * s + 1]; c++) {
      const zonal = (Math.max(data[fluxU + c + 1], 0) - Math.min(data[fluxU + c], 0)) * perDx;
      const meridional = Math.max(data[fluxNorth + c], 0) * north - Math.min(data[fluxV + c], 0) * south;
      const outflow = zonal + meridional;
      const supply = Math.max(data[h + c] - minimumThickness, 0) * perDt;
      const short = outflow > supply;
      data[limit + c] = short ? supply / outflow : 1;
      if (short) limited += 1;
    }
  if (grid.periodic) wrapRow(data, limit, grid.nx);
  if (sums) model.sums.terms['limited'][j] = limited;
}

/** Multiplies V of row j by R of the cell that it comes from; the cells south and north of it have theirs. */
export function limitMeridionalFluxes(model: Model, j: number): void {
  const { grid, data, layout, spans } = model;
  if (isDry(spans.vPoints, j)) return;
  const { bounds, rowStart } = spans.vPoints;
  const fluxV = ringRow(layout, RING.fluxV, j);
  const limit = ringRow(layout, RING.limit, j);
  const limitSouth = ringRow(layout, RING.limit, j - 1);
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++)
    for (let c = bounds[2 * s]; c < bounds[2 * s + 1]; c++) {
      const flux = data[fluxV + c];
      data[fluxV + c] = flux * (flux > 0 ? data[limitSouth + c] : data[limit + c]);
    }
  if (grid.periodic) wrapRow(data, fluxV, grid.nx);
}

/** Multiplies U of row j by R of the cell that it comes from. */
export function limitZonalFluxes(model: Model, j: number): void {
  const { grid, data, layout, spans } = model;
  if (isDry(spans.uPoints, j)) return;
  const { bounds, rowStart } = spans.uPoints;
  const fluxU = ringRow(layout, RING.fluxU, j);
  const limit = ringRow(layout, RING.limit, j);
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++)
    for (let c = bounds[2 * s]; c < bounds[2 * s + 1]; c++) {
      const flux = data[fluxU + c];
      data[fluxU + c] = flux * (flux > 0 ? data[limit + c - 1] : data[limit + c]);
    }
  if (grid.periodic) data[fluxU + WEST + grid.nx] = data[fluxU + WEST];
}
