import { type GrowingSlice } from '../core/growing-rows';

/** How well a budget closes: the largest residual of any interval against the largest term that it is held to. */
export interface Closure {
  /** Largest |residual| over all intervals so far, in the unit of the budget. */
  residual: number;
  /** What it is held against, in the same unit. */
  reference: number;
  /** residual / reference; NaN before the first interval. */
  share: number;
}

/** Round-off of some ten thousand sums; anything above is not round-off and needs a look. */
export const CLOSES_BELOW = 1e-9;

export function columnIndex(slice: GrowingSlice, name: string): number {
  return slice.head()?.columns?.findIndex((column) => column.name === name) ?? -1;
}

function largest(slice: GrowingSlice, name: string): number {
  const column = columnIndex(slice, name);
  if (column < 0) return NaN;
  let most = NaN;
  for (let k = 0; k < slice.rows.count; k++) {
    const size = Math.abs(slice.rows.value(k, column));
    if (!(size <= most)) most = size;
  }
  return most;
}

/** Energy residual against the work of the wind; against the energy itself where no wind blows. */
export function energyClosure(budget: GrowingSlice): Closure & { against: 'wind work' | 'energy' } {
  budget.version();
  const residual = largest(budget, 'energyResidual');
  const wind = largest(budget, 'windWork');
  if (wind > 0) return { residual, reference: wind, share: residual / wind, against: 'wind work' };
  const energy = Math.max(largest(budget, 'kineticEnergy'), largest(budget, 'availablePotentialEnergy'));
  return { residual, reference: energy, share: energy > 0 ? residual / energy : residual, against: 'energy' };
}

/** Mass residual in the budget's own unit; the caller knows the mass of the layer that it is held against. */
export function largestMassResidual(budget: GrowingSlice): number {
  budget.version();
  return largest(budget, 'massResidual');
}
