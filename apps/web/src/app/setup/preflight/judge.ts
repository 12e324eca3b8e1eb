import { preflight, type Preflight, type PreflightContext, type Setup } from '@halfdeep/ocean';

/** What the form asks of the thread beside it, and what that answers under the same number. */
export interface PreflightQuestion {
  number: number;
  setup: Setup;
  context: PreflightContext;
}
export type PreflightAnswer = { number: number } & PreflightOutcome;
/** A result, or why preflight could not say anything, for example a grid beyond all limits. */
export type PreflightOutcome = { result: Preflight } | { failure: string };

/** Preflight, with the grids that cannot be built told apart from faults of the program. */
export function judge(setup: Setup, context: PreflightContext): PreflightOutcome {
  try {
    return { result: preflight(setup, context) };
  } catch (error) {
    if (!(error instanceof RangeError)) throw error;
    return { failure: error.message };
  }
}
