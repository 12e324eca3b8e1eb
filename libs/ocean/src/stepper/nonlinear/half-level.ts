import { E0, E1, E2 } from '../coefficients';
import { H_PLANE, NONLINEAR_RING as RING, ringRow, U_PLANE, V_PLANE, WEST } from '../layout';
import type { Model } from '../model';
import { levelRow, wrapRow } from '../rows';
import { isDry } from '../spans';

/**
 * Step 1 of numerics.md §4 on one row: u and h of this row and v of the next at n + ½, h clipped to hmin on water (§6),
 * and the entrainment w_e(ht). With `sums` the clipped cells of the row are counted.
 */
export function halfLevelRow(model: Model, j: number, sums: boolean): void {
  const { grid, data, layout, spans, minimumThickness, entrainment } = model;
  if (sums) model.sums.terms['clipped'][j] = 0;
  if (isDry(spans.sweep, j)) return;
  const { bounds, rowStart } = spans.sweep;
  const ut = ringRow(layout, RING.ut, j);
  const vt = ringRow(layout, RING.vt, j + 1);
  const ht = ringRow(layout, RING.ht, j);
  const u0 = levelRow(model, 'now', U_PLANE, j);
  const u1 = levelRow(model, 'previous', U_PLANE, j);
  const u2 = levelRow(model, 'before', U_PLANE, j);
  const v0 = levelRow(model, 'now', V_PLANE, j + 1);
  const v1 = levelRow(model, 'previous', V_PLANE, j + 1);
  const v2 = levelRow(model, 'before', V_PLANE, j + 1);
  const h0 = levelRow(model, 'now', H_PLANE, j);
  const h1 = levelRow(model, 'previous', H_PLANE, j);
  const h2 = levelRow(model, 'before', H_PLANE, j);
  for (const c of [WEST - 1, WEST + grid.nx]) data[vt + c] = E0 * data[v0 + c] + E1 * data[v1 + c] + E2 * data[v2 + c];
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++) {
    const end = bounds[2 * s + 1];
    for (let c = bounds[2 * s]; c < end; c++) {
      data[ut + c] = E0 * data[u0 + c] + E1 * data[u1 + c] + E2 * data[u2 + c];
      data[vt + c] = E0 * data[v0 + c] + E1 * data[v1 + c] + E2 * data[v2 + c];
      data[ht + c] = E0 * data[h0 + c] + E1 * data[h1 + c] + E2 * data[h2 + c];
    }
    data[ut + end] = E0 * data[u0 + end] + E1 * data[u1 + end] + E2 * data[u2 + end];
  }
  if (minimumThickness > 0) clipRow(model, j, ht, sums);
  if (grid.periodic) wrapRow(data, ht, grid.nx);
  if (entrainment) entrainRow(model, j, ht);
}

function clipRow(model: Model, j: number, ht: number, sums: boolean): void {
  const { data, spans, minimumThickness } = model;
  const { bounds, rowStart } = spans.cells;
  let clipped = 0;
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++)
    for (let c = bounds[2 * s]; c < bounds[2 * s + 1]; c++) {
      if (data[ht + c] < minimumThickness) clipped += 1;
      data[ht + c] = Math.max(data[ht + c], minimumThickness);
    }
  if (sums) model.sums.terms['clipped'][j] = clipped;
}

/** w_e = (H_e − ht)²/(t_e H_e) where ht < H_e, m/s; the form used in studies with one and a half layers (from memory). */
function entrainRow(model: Model, j: number, ht: number): void {
  const { grid, data, layout, spans, entrainment } = model;
  if (!entrainment) return;
  const { bounds, rowStart } = spans.cells;
  const entrained = ringRow(layout, RING.entrained, j);
  const onset = entrainment.onsetThickness;
  const per = 1 / (entrainment.timescale * onset);
  for (let s = rowStart[j]; s < rowStart[j + 1]; s++)
    for (let c = bounds[2 * s]; c < bounds[2 * s + 1]; c++) {
      const lack = Math.max(onset - data[ht + c], 0);
      data[entrained + c] = lack * lack * per;
    }
  if (grid.periodic) wrapRow(data, entrained, grid.nx);
}

/**
 * What is given back evenly over the water so that entrainment leaves the total volume as it is, m/s: the basin mean of
 * w_e of this very step, found before it by a sweep of its own. 0 without uniform detrainment.
 */
export function uniformDetrainment(model: Model): number {
  const { grid, data, spans, minimumThickness, entrainment } = model;
  if (entrainment?.detrainment !== 'uniform') return 0;
  const onset = entrainment.onsetThickness;
  const per = 1 / (entrainment.timescale * onset);
  const { bounds, rowStart } = spans.cells;
  let [volume, area] = [0, 0];
  for (let j = 0; j < grid.ny; j++) {
    const h0 = levelRow(model, 'now', H_PLANE, j);
    const h1 = levelRow(model, 'previous', H_PLANE, j);
    const h2 = levelRow(model, 'before', H_PLANE, j);
    let [row, cells] = [0, 0];
    for (let s = rowStart[j]; s < rowStart[j + 1]; s++) {
      let [even, odd] = [0, 0];
      const first = bounds[2 * s];
      for (let c = first; c < bounds[2 * s + 1]; c++) {
        const raw = E0 * data[h0 + c] + E1 * data[h1 + c] + E2 * data[h2 + c];
        const lack = Math.max(onset - (minimumThickness > 0 ? Math.max(raw, minimumThickness) : raw), 0);
        const entrained = lack * lack * per;
        if (((c - first) & 1) === 0) even += entrained;
        else odd += entrained;
      }
      row += even + odd;
      cells += bounds[2 * s + 1] - first;
    }
    volume += grid.dxC[j] * row;
    area += grid.dxC[j] * cells;
  }
  return area > 0 ? volume / area : 0;
}
