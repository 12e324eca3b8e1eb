import type { Setup } from '@halfdeep/ocean';
import type { Progress, QueuedReason, RunFailure } from '@halfdeep/contracts';
import type { FinishedRun, LedgerRun, QueueSettings, RunLedger } from '../run-ledger';

/** A run as the specs see it. */
export interface MemoryRun extends LedgerRun {
  failure: RunFailure | null;
  finished: FinishedRun | null;
  progress: Progress | null;
}

/** The run ledger in memory, for specs of the queue alone: every rule of the port, no owners. */
export class MemoryLedger implements RunLedger {
  readonly runs = new Map<string, MemoryRun>();
  order: string[] = [];
  kept: QueueSettings;

  constructor(settings: Partial<QueueSettings> = {}) {
    this.kept = { cap: 1, paused: false, whenLowered: 'drain', ...settings };
  }

  add(runId: string, setup: Setup): void {
    this.runs.set(runId, {
      runId,
      setup,
      state: 'queued',
      queuedReason: null,
      deaths: 0,
      workerPid: null,
      failure: null,
      finished: null,
      progress: null,
    });
    this.order.push(runId);
  }

  get(runId: string): MemoryRun {
    const run = this.runs.get(runId);
    if (!run) throw new Error(`The ledger has no run ${runId}.`);
    return run;
  }

  settings = () => Promise.resolve({ ...this.kept });
  saveSettings = (settings: QueueSettings) => Promise.resolve(void (this.kept = { ...settings }));
  find = (runId: string) => Promise.resolve(this.runs.get(runId) ?? null);
  waiting = () => Promise.resolve(this.order.map((runId) => this.get(runId)));
  running = () => Promise.resolve([...this.runs.values()].filter(({ state }) => state === 'running'));

  claimNext(): Promise<LedgerRun | null> {
    const runId = this.order.shift();
    if (runId === undefined) return Promise.resolve(null);
    const run = Object.assign(this.get(runId), { state: 'running', queuedReason: null, failure: null });
    return Promise.resolve({ ...run });
  }

  markQueued(runId: string, reason: QueuedReason | null, place: 'front' | 'back'): Promise<boolean> {
    const from = place === 'front' ? (['running'] as const) : (['stopped', 'failed'] as const);
    const done = this.move(runId, from, { state: 'queued', queuedReason: reason, workerPid: null, failure: null });
    if (done) {
      if (place === 'front') this.order.unshift(runId);
      else this.order.push(runId);
      if (place === 'back') this.get(runId).deaths = 0;
    }
    return Promise.resolve(done);
  }

  markFinished = (runId: string, finished: FinishedRun) =>
    Promise.resolve(this.move(runId, ['running', 'stopped'], { state: 'finished', finished, workerPid: null }));
  markStopped = (runId: string) => Promise.resolve(this.move(runId, ['running', 'queued'], { state: 'stopped' }));
  markFailed = (runId: string, failure: RunFailure) =>
    Promise.resolve(this.move(runId, ['running', 'queued'], { state: 'failed', failure, workerPid: null }));

  recordWorker = (runId: string, pid: number | null) => Promise.resolve(void (this.get(runId).workerPid = pid));
  recordProgress = (runId: string, progress: Progress) =>
    Promise.resolve(void (this.get(runId).progress = structuredClone(progress)));
  countDeath = (runId: string) => Promise.resolve(++this.get(runId).deaths);
  clearDeaths = (runId: string) => Promise.resolve(void (this.get(runId).deaths = 0));

  reorder(runIds: readonly string[]): Promise<void> {
    const wanted = runIds.filter((runId) => this.order.includes(runId));
    this.order = [...wanted, ...this.order.filter((runId) => !wanted.includes(runId))];
    return Promise.resolve();
  }

  private move(runId: string, from: readonly MemoryRun['state'][], to: Partial<MemoryRun>): boolean {
    const run = this.runs.get(runId);
    if (!run || !from.includes(run.state)) return false;
    this.order = this.order.filter((waiting) => waiting !== runId);
    Object.assign(run, { queuedReason: null }, to);
    return true;
  }
}
