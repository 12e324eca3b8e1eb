import { type GrowingSlice } from '../../core/growing-rows';
import { CLOSES_BELOW } from '../energy-closure';

/** `referenceName` of a residual of mass that no source is larger than. */
export const REST_MASS = 'mass of the layer at rest';

/** How one budget of a run closes, over all of its intervals so far. */
export interface BudgetClosure {
  /** "Energy", "Mass": what the residual is of. */
  name: string;
  unit: string;
  /** Largest |residual| of any interval, and the largest |term| that it is held against. */
  residual: number;
  reference: number;
  /** What that term is, in words. */
  referenceName: string;
  /** residual / reference; 0 where both are nothing. */
  share: number;
  closes: boolean;
}

/**
 * One closure a residual column of the budget series: the largest residual over the largest of the terms that are counted
 * like it. A budget of mass without any source has terms of round-off alone: the mass of the layer at rest (Gt) then is
 * what they are held against. Empty before the first interval.
 */
export function budgetClosures(budget: GrowingSlice, restMassGt: number): BudgetClosure[] {
  budget.version();
  const columns = budget.head()?.columns ?? [];
  if (budget.rows.count === 0) return [];
  return columns.flatMap((column, k) => {
    if (!column.name.endsWith('Residual')) return [];
    let reference = 0;
    let referenceName = '';
    columns.forEach(({ unit, kind, label }, other) => {
      if (other === k || unit !== column.unit || kind !== column.kind) return;
      const size = largest(budget, other);
      if (!(size > reference)) return;
      reference = size;
      referenceName = lowerFirst(label);
    });
    if (column.name === 'massResidual' && restMassGt > reference) {
      reference = restMassGt;
      referenceName = REST_MASS;
    }
    const residual = largest(budget, k);
    const share = residual === 0 ? 0 : residual / reference;
    const name = upperFirst(column.label.replace(/ residual$/i, '').replace(/^residual of /i, ''));
    return [{ name, unit: column.unit, residual, reference, referenceName, share, closes: share < CLOSES_BELOW }];
  });
}

/** Largest |value| of a column; NaN when one is not finite. */
function largest(budget: GrowingSlice, column: number): number {
  let most = 0;
  for (let record = 0; record < budget.rows.count; record++) {
    const size = Math.abs(budget.rows.value(record, column));
    if (!(size <= most)) most = size;
    if (Number.isNaN(most)) return NaN;
  }
  return most;
}

function lowerFirst(text: string): string {
  return text.charAt(0).toLowerCase() + text.slice(1);
}

function upperFirst(text: string): string {
  return text.charAt(0).toUpperCase() + text.slice(1);
}
