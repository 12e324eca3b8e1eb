/** What preflight answers: shown while typing, checked again by the API, kept with the run. */
export interface Preflight {
  verdict: Verdict;
  derived: DerivedNumber[];
  /** Refused first, then cautions, then passes by closeness to the limit. */
  checks: Check[];
  cost: Cost;
  grid: GridSummary;
  /** What snapping moved, in sentences: "South edge moved by 0.02° so that the equator lies on a v row." */
  notes: string[];
  /** n that the limits of numerics.md §5 propose, steps a day. */
  proposedStepsPerDay: number;
}

export type Verdict = 'pass' | 'caution' | 'refuse';

export interface DerivedNumber {
  id: string;
  label: string;
  /** Symbol of the trade, e.g. "c"; empty when there is none. */
  symbol: string;
  value: number;
  unit: string;
}

export interface Check {
  id: string;
  label: string;
  verdict: Verdict;
  /** The number of this setup and the bound that it is held against, in `unit`. */
  value: number;
  limit: number;
  unit: string;
  /** value/limit, or limit/value where a minimum is asked: beyond 1 is out of bounds. Finite, ≥ 0. */
  ratio: number;
  /** One sentence: what was found and what would be right. */
  reason: string;
  /** A change of the setup that cures it, or null. */
  remedy: Remedy | null;
  /** JSON pointers of the setup fields that the check is about. */
  pointers: string[];
}

/** `label` is the button's text ("Use 36 a day"); each change is a JSON pointer into the setup and its new value. */
export interface Remedy {
  label: string;
  changes: { pointer: string; value: unknown }[];
}

export interface Cost {
  cells: number;
  wetCells: number;
  steps: number;
  /** Seconds of one core at the given speed. */
  seconds: number;
  /** Bytes: frames, series, two checkpoints. */
  diskBytes: number;
  frames: number;
  /** Cell-steps a second that `seconds` assumes. */
  cellStepsPerSecond: number;
}

export interface GridSummary {
  nx: number;
  ny: number;
  dxM: number;
  dyM: number;
  dtS: number;
}

/** What the machine allows; unknown values are left out and the rows that need them are not shown. */
export interface PreflightContext {
  cellStepsPerSecond?: number;
  freeDiskBytes?: number;
  quotaBytes?: number;
}

/** One difference between two setups, in words a person reads: "seasonal strength 1.00 → 1.20". */
export interface SetupChange {
  /** JSON pointer into the setup. */
  pointer: string;
  label: string;
  from: string;
  to: string;
  unit: string;
}
