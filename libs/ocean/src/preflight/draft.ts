import type { Check, Cost, PreflightContext, Remedy, Verdict } from '../preflight-types';
import type { Setup } from '../setup';
import type { GridLayout } from '../grid/grid-layout';
import type { LandRows } from './land-rows';
import type { Scales } from './scales';
import type { WindEstimate } from './thinning';

/** What every rule reads. */
export interface Case {
  setup: Setup;
  context: PreflightContext;
  scales: Scales;
  land: LandRows;
  /** The grid of the coast where that is not the run's own, and what it does to the run's. */
  coast: GridLayout | null;
  coastNotes: string[];
  cost: Omit<Cost, 'wetCells'>;
  wind: WindEstimate;
  /** Largest |η|/H that the start brings with it; null where not known. */
  startThinning: number | null;
}

/** A row before its remedy is chosen: `cures` in order of preference, each tried before it is offered. */
export type Draft = Omit<Check, 'remedy'> & { cures: () => Remedy[] };

/** A rule gives one row, or null when it does not apply to this setup. */
export type Rule = (of: Case) => Draft | null;

/** Stands for "beyond any bound" where the quotient itself would not be finite. */
const FAR_BEYOND = 1e6;

/** value/limit where a maximum is asked: at most 1 passes. */
export function ratioOfMaximum(value: number, limit: number): number {
  if (value <= 0) return 0;
  return limit > 0 ? Math.min(value / limit, FAR_BEYOND) : FAR_BEYOND;
}

/** limit/value where a minimum is asked: at most 1 passes. */
export function ratioOfMinimum(value: number, limit: number): number {
  if (limit <= 0) return 0;
  return value > 0 ? Math.min(limit / value, FAR_BEYOND) : FAR_BEYOND;
}

/** Pass within the limit, caution or refusal beyond it. */
export function verdictOf(ratio: number, refused: boolean): Verdict {
  if (refused) return 'refuse';
  return ratio <= 1 ? 'pass' : 'caution';
}

/** No cure by a single change of fields. */
export const NO_CURE = (): Remedy[] => [];
