import { SECONDS_PER_DAY } from '../forcing/season';
import type { Setup } from '../setup';
import { scalesOf, type StepRates } from './scales';

/** Bounds of numerics.md §5; S = c dt √(1/dx² + 1/dy²), F = |f|max dt, νS = A dt (1/dx² + 1/dy²), Fr = largest speed over c. */
export const STEP_LIMITS = {
  /** S that is refused beyond, and what it falls to when F > 0.5. */
  gravity: 0.88,
  gravityWithStrongRotation: 0.8,
  strongRotation: 0.5,
  gravityCaution: 0.75,
  coriolis: 0.6,
  coriolisCaution: 0.4,
  viscous: 0.16,
  /** S(1 + 2Fr) of nonlinear runs, and Fr itself. */
  flow: 0.91,
  flowCaution: 0.8,
  froudeCaution: 0.5,
  /** S and F of the proposed step. */
  gravityDefault: 0.7,
  coriolisDefault: 0.3,
} as const;

export interface StepNumbers {
  S: number;
  F: number;
  nuS: number;
  /** The largest S allowed at this F. */
  S0: number;
  /** (S/S0)² + νS/0.16; at most 1. */
  combined: number;
  /** S(1 + 2Fr); S itself in linear runs. */
  flow: number;
}

export function stepNumbers(rates: StepRates, dt: number): StepNumbers {
  const S = rates.gravity * dt;
  const F = rates.coriolis * dt;
  const nuS = rates.viscous * dt;
  const S0 = F > STEP_LIMITS.strongRotation ? STEP_LIMITS.gravityWithStrongRotation : STEP_LIMITS.gravity;
  return { S, F, nuS, S0, combined: (S / S0) ** 2 + nuS / STEP_LIMITS.viscous, flow: S * (1 + 2 * rates.froude) };
}

/** True when no bound, caution bounds included, is reached at n steps a day. */
export function stepPasses(rates: StepRates, stepsPerDay: number): boolean {
  const { S, F, combined, flow } = stepNumbers(rates, SECONDS_PER_DAY / stepsPerDay);
  const still = rates.froude === 0 || flow <= STEP_LIMITS.flowCaution;
  return S <= STEP_LIMITS.gravityCaution && F <= STEP_LIMITS.coriolisCaution && combined <= 1 && still;
}

/** Smallest n, a multiple of 4, whose step does not exceed the default of numerics.md §5 and passes every bound. */
export function proposedSteps(rates: StepRates): number {
  const byGravity = STEP_LIMITS.gravityDefault / (1 + 2 * rates.froude) / rates.gravity;
  const byRotation = rates.coriolis > 0 ? STEP_LIMITS.coriolisDefault / rates.coriolis : Infinity;
  // (S/S0)² + νS/0.16 = 1, solved for the step in the form that does not cancel.
  const a = (rates.gravity / STEP_LIMITS.gravity) ** 2;
  const b = rates.viscous / STEP_LIMITS.viscous;
  const byBoth = 2 / (b + Math.sqrt(b * b + 4 * a));
  const longest = Math.min(byGravity, byRotation, byBoth);
  let n = Math.max(4, 4 * Math.ceil(SECONDS_PER_DAY / longest / 4));
  // The quotient may be off by a rounding error either way.
  if (n > 4 && fits(rates, n - 4, longest)) n -= 4;
  else if (!fits(rates, n, longest)) n += 4;
  return n;
}

function fits(rates: StepRates, n: number, longest: number): boolean {
  return SECONDS_PER_DAY / n <= longest * (1 + 1e-12) && stepPasses(rates, n);
}

/**
 * Steps a day for a setup whatever its own: the smallest n, a multiple of 4, whose step does not exceed
 * min(0.7/(c√(1/dx² + 1/dy²)), 0.3/|f|max), 0.7/(1 + 2Fr) instead of 0.7 for nonlinear runs, and passes preflight. May lie beyond `LIMITS.stepsPerDay`; then only a
 * coarser grid or less viscosity helps.
 */
export function proposeStepsPerDay(setup: Setup): number {
  return proposedSteps(scalesOf(setup).rates);
}
