import { fieldOf } from '../stepper/fields';
import { forRuns, type Model } from '../stepper/model';
import type { NativeVariable } from './levels';
import { smallestSpacing } from './stability';

/** A value of the state and where it lies. */
export interface Extreme {
  value: number;
  variable: NativeVariable;
  i: number;
  j: number;
}

/** What a nonlinear run is watched for: the largest |u| or |v|, the largest and the smallest h on water. */
export interface Watch {
  fastest: Extreme;
  thickest: Extreme;
  thinnest: Extreme;
}

/** S(1 + 2Fr) from which a run is told to be careful, and beyond which it stops (numerics.md §5). */
export const FLOW_CAUTION = 0.8;
export const FLOW_STOP = 0.91;

/** Looks the present state of a nonlinear model through. */
export function watchState(model: Model): Watch {
  const fastest: Extreme = { value: 0, variable: 'u', i: 0, j: 0 };
  const thickest: Extreme = { value: -Infinity, variable: 'eta', i: 0, j: 0 };
  const thinnest: Extreme = { value: Infinity, variable: 'eta', i: 0, j: 0 };
  const { spans, grid } = model;
  for (const variable of ['u', 'v'] as const) {
    const { data, offset, rowStride } = fieldOf(model, variable);
    for (let j = 0; j < grid.ny; j++)
      forRuns(variable === 'u' ? spans.uPoints : spans.vPoints, j, (first, end) => {
        for (let i = first; i < end; i++) {
          const speed = Math.abs(data[offset + j * rowStride + i]);
          if (speed > fastest.value) Object.assign(fastest, { value: speed, variable, i, j });
        }
      });
  }
  const { data, offset, rowStride } = fieldOf(model, 'h');
  for (let j = 0; j < grid.ny; j++)
    forRuns(spans.cells, j, (first, end) => {
      for (let i = first; i < end; i++) {
        const h = data[offset + j * rowStride + i];
        if (h > thickest.value) Object.assign(thickest, { value: h, i, j });
        if (h < thinnest.value) Object.assign(thinnest, { value: h, i, j });
      }
    });
  return { fastest, thickest, thinnest };
}

/** S(1 + 2Fr) = dt √(1/dx² + 1/dy²) (c + 2 |u|max) with c = √(g′ h_max) and the smallest dx (numerics.md §5). */
export function flowNumber(model: Model, { fastest, thickest }: Watch): number {
  const { grid, dt, reducedGravity } = model;
  const dx = smallestSpacing(grid);
  const c = Math.sqrt(reducedGravity * thickest.value);
  return dt * Math.sqrt(1 / (dx * dx) + 1 / (grid.dy * grid.dy)) * (c + 2 * fastest.value);
}

/** True when nothing keeps the wind from driving a layer at its minimum thickness to any speed (numerics.md §6). */
export function isUnprotected(model: Model): boolean {
  return model.equations === 'nonlinear' && model.entrainment === null && model.stressFloor === 0;
}
