import { type Convergence, type ConvergenceLevel, type ConvergenceMeasure, type Run } from '@halfdeep/contracts';
import { corvaneSetup } from '@halfdeep/ocean';
import { aRun } from '../../testing/samples';

export const RUN_ID = '00000000-0000-4000-8000-000000000101';
export const EXPERIMENT_ID = '00000000-0000-4000-8000-000000000500';

/** Invented: a finished run with its setup. */
export function aWholeRun(over: Partial<Run> = {}): Run {
  const can = { stop: false, resume: false, extend: true, repeat: true, derive: true, delete: true };
  return {
    ...aRun({
      id: RUN_ID,
      label: 'Control',
      state: 'finished',
      descent: 'control',
      parentRunId: null,
      changes: [],
      can,
    }),
    setup: corvaneSetup(),
    preflight: { derived: [] } as unknown as Run['preflight'],
    lastState: null,
    ...over,
  };
}

/** Invented: a grid that nobody has queued. */
export function aLevel(role: ConvergenceLevel['role'], over: Partial<ConvergenceLevel> = {}): ConvergenceLevel {
  const half = role === 'half';
  return {
    role,
    run: null,
    plan: {
      nx: half ? 120 : 480,
      ny: half ? 70 : 280,
      stepsPerDay: half ? 16 : 40,
      seconds: half ? 12 : 460,
      diskBytes: half ? 20e6 : 320e6,
      verdict: 'pass',
      remarks: [],
      notes: [],
    },
    refusal: null,
    ...over,
  };
}

/** Invented: a transport that converges. */
export function aMeasure(over: Partial<ConvergenceMeasure> = {}): ConvergenceMeasure {
  return {
    section: 0,
    name: 'Equator',
    along: 'latitude',
    atDeg: 0,
    quantity: 'amplitude',
    unit: 'Sv',
    half: 5.1,
    own: 5.3,
    twice: 5.35,
    verdict: 'asymptotic',
    sentence: 'In the asymptotic range, with an observed order of 2.00.',
    order: 2,
    extrapolated: 5.3667,
    gci: { own: { amount: 0.0833, share: 0.0157 }, twice: { amount: 0.0208, share: 0.0039 } },
    asymptoticRatio: 1.009,
    ...over,
  };
}

/** Invented: nothing is queued yet, and this person may. */
export function aConvergence(over: Partial<Convergence> = {}): Convergence {
  const waitingFor = 'No run has been queued at half the resolution or at twice the resolution.';
  return {
    runId: RUN_ID,
    canQueue: true,
    choices: (['same', 'anew'] as const).map((coast) => ({
      coast,
      levels: [aLevel('half'), aLevel('twice')],
      waitingFor,
      result: null,
    })),
    ...over,
  };
}
