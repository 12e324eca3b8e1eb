import { WEST } from './layout';
import type { Model } from './model';
import { isDry } from './spans';
import { NONE } from './statics';

/**
 * Writes the stress of row j, times `factor`, into the model's stress row: Σ over bases in order, first those that are
 * one number a row, then the fields. `model.factors` holds the factors of the step. Rows without points are left alone.
 */
export function stressOfRow(model: Model, j: number, component: 'x' | 'y', factor: number): void {
  const { forcing, factors, data, stress, layout, statics, spans, grid } = model;
  if (isDry(component === 'x' ? spans.uPoints : spans.vPoints, j)) return;
  const { bases } = forcing;
  let uniform = 0;
  for (let b = 0; b < bases.length; b++) {
    const row = component === 'x' ? bases[b].tauxRow : bases[b].tauyRow;
    if (row) uniform += factors[b] * row[j];
  }
  const first = stress + WEST;
  data.fill(uniform * factor, first, first + grid.nx);
  const planes = component === 'x' ? statics.tauX : statics.tauY;
  for (let b = 0; b < bases.length; b++) {
    if (planes[b] === NONE) continue;
    const part = factors[b] * factor;
    const field = planes[b] + j * layout.pitch + WEST;
    for (let i = 0; i < grid.nx; i++) data[first + i] += part * data[field + i];
  }
}
