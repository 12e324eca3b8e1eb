import { NONLINEAR_RING as RING, ringRow } from '../layout';
import type { Model } from '../model';
import { isDry } from '../spans';
import { NONE } from '../statics';

/**
 * Corner row j: ζ, q = (f + s ζ)/h_q, the products a = q (V_W + V_E) and b = q (U_S + U_N) of Sadourny's (1975)
 * energy-conserving form, and A s ζ. h_q is the mean of the water cells around the corner (numerics.md §3): first every
 * corner is made with four of them, then those that touch land again with their own number and the slip factor s.
 */
export function cornerRow(model: Model, j: number): void {
  const { grid, data, layout, spans, rows, viscosity, statics, coastCorners } = model;
  if (isDry(spans.corners, j)) return;
  const { bounds, rowStart } = spans.corners;
  const ut = ringRow(layout, RING.ut, j);
  const utSouth = ringRow(layout, RING.ut, j - 1);
  const vt = ringRow(layout, RING.vt, j);
  const ht = ringRow(layout, RING.ht, j);
  const htSouth = ringRow(layout, RING.ht, j - 1);
  const fluxU = ringRow(layout, RING.fluxU, j);
  const fluxUSouth = ringRow(layout, RING.fluxU, j - 1);
  const fluxV = ringRow(layout, RING.fluxV, j);
  const turnU = ringRow(layout, RING.turnU, j);
  const turnV = ringRow(layout, RING.turnV, j);
  const spin = ringRow(layout, RING.spin, j);
  const A = statics.viscosityCorner === NONE ? NONE : statics.viscosityCorner + j * layout.pitch;
  const f = grid.f[j];
  const perDx = rows.perDxV[j];
  const curlNorth = rows.curlNorth[j];
  const curlSouth = rows.curlSouth[j];
  const shareSouth = rows.shareSouth[j];
  const shareNorth = rows.shareNorth[j];
  const corner = (c: number, perWet: number, slip: number) => {
    const raw = (data[vt + c] - data[vt + c - 1]) * perDx - (data[ut + c] * curlNorth - data[utSouth + c] * curlSouth);
    const zeta = slip * raw;
    const water =
      shareSouth * (data[htSouth + c - 1] + data[htSouth + c]) + shareNorth * (data[ht + c - 1] + data[ht + c]);
    const q = (f + zeta) / (perWet * water);
    data[turnU + c] = q * (data[fluxV + c - 1] + data[fluxV + c]);
    data[turnV + c] = q * (data[fluxUSouth + c] + data[fluxU + c]);
    data[spin + c] = (A === NONE ? viscosity : data[A + c]) * zeta;
  };
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++)
    for (let c = bounds[2 * s]; c < bounds[2 * s + 1]; c++) corner(c, 0.25, 1);
  const slip = model.slip === 'free' ? 0 : 2;
  for (let k = coastCorners.rowStart[j]; k < coastCorners.rowStart[j + 1]; k++)
    corner(coastCorners.columns[k], coastCorners.perWet[k], slip);
}
