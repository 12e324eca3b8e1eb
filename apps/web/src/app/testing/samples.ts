import type { Desk, RunSummary } from '@halfdeep/contracts';

/** Invented data for specs: a run, changed where a spec needs it. */
export function aRun(over: Partial<RunSummary> = {}): RunSummary {
  return {
    id: '00000000-0000-4000-8000-000000000101',
    experimentId: '00000000-0000-4000-8000-000000000500',
    question: 'Does a stronger Halcyon wind carry proportionally more heat?',
    label: 'Strong',
    state: 'queued',
    queuedReason: null,
    queuePosition: null,
    failure: null,
    parentRunId: '00000000-0000-4000-8000-000000000100',
    parentLabel: 'Control',
    descent: 'sensitivity',
    changes: [{ pointer: '/wind/seasonalStrength', label: 'seasonal strength', from: '1.00', to: '1.20', unit: '' }],
    owner: { id: '00000000-0000-4000-8000-000000000001', name: 'modeller' },
    createdAt: '2026-12-01T06:00:00.000Z',
    startedAt: null,
    endedAt: null,
    progress: {
      step: 0,
      totalSteps: 87_600,
      startStep: 0,
      day: 0,
      totalDays: 3650,
      cellStepsPerSecond: null,
      secondsLeft: null,
      records: { frames: 0, sections: 0, moorings: 0, budget: 0 },
      savedStep: null,
      cautions: [],
    },
    fingerprint: null,
    grid: { nx: 300, ny: 175 },
    diskBytes: null,
    can: { stop: true, resume: false, extend: false, repeat: false, derive: true, delete: true },
    ...over,
  };
}

/** A desk on which nothing moves. */
export function aDesk(over: Partial<Desk> = {}): Desk {
  return {
    since: '2026-11-26T16:40:00.000Z',
    queue: { cap: 3, paused: false, running: 0, waiting: 0 },
    running: [],
    waiting: [],
    ended: [],
    recent: false,
    disk: { usedBytes: 1.84e10, quotaBytes: 4e10, freeBytes: 2e11 },
    ...over,
  };
}
