import { availableParallelism } from 'node:os';
import { setTimeout as sleep } from 'node:timers/promises';
import BetterQueue from 'better-queue';
import type { Observable } from 'rxjs';
import type { Progress, QueuedReason, QueueSummary, RunFailure } from '@halfdeep/contracts';
import { LedgerStore, type RunTask } from './ledger-store';
import { QueueAnnouncer } from './queue-announcer';
import { type EmbeddedQueueOptions, withDefaults } from './queue-options';
import type { LedgerRun, QueueSettings, RunLedger } from './run-ledger';
import type { QueueWorker, RunQueue, RunQueueEvent } from './run-queue';
import type { WorkerMessage, WorkerReport } from './worker-messages';
import { type WorkerEnd, WorkerProcess } from './worker-process';

/** Deaths of a run's workers without a new checkpoint after which the run has failed. */
const MAX_DEATHS = 3;

/** Why a worker was ordered to save. */
type Intent = 'stop' | 'requeue' | 'close';

/** Properties of better-queue that its types leave out. */
interface LiveQueue {
  concurrent: number;
}

/** A worker with what the engine wants of it. */
interface Active {
  worker: WorkerProcess;
  intent: Intent | null;
  deaths: number;
  /** Ledger writes of this worker's messages, one after another. */
  writes: Promise<void>;
}

/**
 * The queue inside the API process: better-queue takes the runs in the ledger's order, as many at once as the cap says,
 * and each task forks one worker process.
 */
export class EmbeddedQueue implements RunQueue {
  readonly events$: Observable<RunQueueEvent>;
  readonly maxCap = Math.max(4, availableParallelism());
  private readonly options: Required<EmbeddedQueueOptions>;
  private readonly announce: QueueAnnouncer;
  private readonly ledger: RunLedger;
  private readonly active = new Map<string, Active>();
  /** Tasks from claim to the last word in the ledger, by run. */
  private readonly tasks = new Map<string, Promise<void>>();
  private settings: QueueSettings = { cap: 1, paused: false, whenLowered: 'drain' };
  private queue: BetterQueue<RunTask, void> | null = null;
  private holdUntil = 0;
  private closing: Promise<void> | null = null;

  /** RangeError when the environment asks for a pause between checkpoints that is no number of seconds. */
  constructor(options: EmbeddedQueueOptions) {
    this.options = withDefaults(options);
    this.ledger = options.ledger;
    this.announce = new QueueAnnouncer(
      () => this.summary(),
      (error) => this.options.log('counting the queue', error),
    );
    this.events$ = this.announce.events$;
  }

  async start(): Promise<void> {
    if (this.queue) throw new Error('The queue has been started already.');
    this.settings = await this.ledger.settings();
    // Last claimed first, so that the one that was first is at the front again.
    for (const run of (await this.ledger.running()).reverse()) await this.requeue(run.runId, 'server stopped');
    this.queue = new BetterQueue<RunTask, void>({
      process: (task: RunTask, done: (error?: unknown) => void) => {
        void this.perform(task).then(() => done());
      },
      id: 'id',
      concurrent: Math.min(this.settings.cap, this.maxCap),
      store: new LedgerStore(
        this.ledger,
        (run) => this.announce.state(run.runId, 'running'),
        (error) => this.retryLater(error),
      ),
      precondition: (done) => done(null, Date.now() >= this.holdUntil),
      preconditionRetryTimeout: 1000,
    });
    if (this.settings.paused) this.queue.pause();
    // Better-queue looks for one task at a time; after each start there may be room for the next.
    this.queue.on('task_started', () => this.nudge());
    await this.announce.queue();
  }

  async enqueue(runId: string): Promise<void> {
    const run = await this.ledger.find(runId);
    if (!run) throw new Error(`Run ${runId} is not in the ledger.`);
    if (run.state !== 'queued') return; // taken already
    this.opened().push({ id: runId });
    this.announce.state(runId, 'queued', run.queuedReason);
  }

  async stop(runId: string): Promise<boolean> {
    if (!(await this.ledger.markStopped(runId))) return false;
    const active = this.active.get(runId);
    if (active) {
      active.intent = 'stop';
      active.worker.save();
    }
    this.announce.state(runId, 'stopped');
    return true;
  }

  async released(runId: string): Promise<void> {
    await this.tasks.get(runId);
  }

  async setCap(cap: number, whenLowered: 'drain' | 'checkpoint'): Promise<void> {
    if (!(Number.isInteger(cap) && cap >= 1 && cap <= this.maxCap))
      throw new RangeError(`The cap must be a whole number from 1 to ${this.maxCap}; ${cap} arrived.`);
    await this.change({ cap, whenLowered });
    (this.opened() as unknown as LiveQueue).concurrent = cap;
    if (whenLowered === 'checkpoint') {
      const working = this.working();
      const youngestFirst = working.sort(([, a], [, b]) => b.worker.startedAt.getTime() - a.worker.startedAt.getTime());
      for (const [runId, active] of youngestFirst.slice(0, Math.max(0, working.length - cap))) {
        if (!(await this.requeue(runId, 'cap lowered'))) continue;
        active.intent = 'requeue';
        active.worker.save();
      }
    }
    this.nudge();
    await this.announce.queue();
  }

  async setPaused(paused: boolean): Promise<void> {
    await this.change({ paused });
    if (paused) this.opened().pause();
    else this.nudge();
    await this.announce.queue();
  }

  async reorder(runIds: readonly string[]): Promise<void> {
    await this.ledger.reorder(runIds);
    await this.announce.queue();
  }

  async summary(): Promise<QueueSummary> {
    const [running, waiting] = [await this.ledger.running(), await this.ledger.waiting()];
    const { cap, paused } = this.settings;
    return { cap, paused, running: running.length, waiting: waiting.length };
  }

  workers(): QueueWorker[] {
    return [...this.active.values()].map(({ worker, deaths }) => worker.info(deaths));
  }

  close(): Promise<void> {
    this.closing ??= this.shutDown();
    return this.closing;
  }

  private async shutDown(): Promise<void> {
    this.queue?.pause();
    const patience = this.options.closeSeconds * 1000;
    for (const active of this.active.values()) {
      active.intent ??= 'close';
      active.worker.save();
    }
    const abort = new AbortController();
    const impatient = sleep(patience, undefined, { signal: abort.signal }).then(
      () => this.active.forEach(({ worker }) => worker.kill()),
      () => undefined, // all ended in time
    );
    // A task claimed a moment ago may just be forking its worker: it sees `closing` and gives the run back.
    while (this.tasks.size > 0) await Promise.all(this.tasks.values());
    abort.abort();
    await impatient;
    await new Promise<void>((resolve) => (this.queue ? this.queue.destroy(resolve) : resolve()));
    await this.announce.complete();
  }

  /** One task of better-queue from claim to the last word in the ledger. Never rejects. */
  private async perform(task: RunTask): Promise<void> {
    const { run } = task;
    if (!run) return;
    // The run was stopped and resumed while its last worker is still saving: one writer at a time.
    const before = this.tasks.get(run.runId);
    const work = (async () => {
      await before;
      await this.compute(run);
    })().catch((error: unknown) => this.recover(run.runId, error));
    this.tasks.set(run.runId, work);
    await work;
    if (this.tasks.get(run.runId) === work) this.tasks.delete(run.runId);
  }

  /** The ledger failed in the middle of a task: the run would stay `running` for ever, so it is put back once that works. */
  private recover(runId: string, error: unknown): void {
    this.options.log(`computing run ${runId}`, error);
    const retry = setTimeout(() => {
      this.requeue(runId, 'worker died')
        .then(() => this.resumeRequeued(runId))
        .catch((again: unknown) => this.recover(runId, again));
    }, 2000);
    retry.unref();
  }

  private async compute(run: LedgerRun): Promise<void> {
    const { runId, setup } = run;
    if ((await this.ledger.find(runId))?.state !== 'running') return; // stopped before it began
    if (this.closing) {
      await this.requeue(runId, 'server stopped');
      return;
    }
    if (this.working().length >= this.settings.cap) {
      // Claimed just before the cap was lowered.
      await this.requeue(runId, 'cap lowered');
      await this.resumeRequeued(runId);
      return;
    }
    const { varDir, checkpointSeconds } = this.options;
    const threads = Math.max(1, Math.floor(availableParallelism() / this.settings.cap));
    const job = { runId, setup, varDir, checkpointSeconds, threads };
    const worker = new WorkerProcess(job, this.options.worker, (message) => this.hear(runId, message));
    const active: Active = { worker, intent: null, deaths: run.deaths, writes: Promise.resolve() };
    this.active.set(runId, active);
    this.write(active, 'noting the worker', async () => {
      await this.ledger.recordWorker(runId, worker.pid ?? null);
      // An order to stop that came while the worker was being forked found nobody to give it to.
      const state = (await this.ledger.find(runId))?.state;
      if (state === 'running' || active.intent !== null) return;
      active.intent = 'stop';
      worker.save();
    });
    const end = await worker.ended;
    await active.writes;
    try {
      await this.settle(runId, active, end);
    } finally {
      this.active.delete(runId);
    }
    await this.announce.queue();
  }

  /** Runs with a worker that has not been ordered to save. */
  private working(): [string, Active][] {
    return [...this.active.entries()].filter(([, active]) => active.intent === null);
  }

  private hear(runId: string, message: WorkerMessage): void {
    const active = this.active.get(runId);
    if (!active) return;
    if (message.type === 'report') this.write(active, 'noting progress', () => this.noteProgress(runId, message));
    if (message.type === 'checkpoint') {
      active.deaths = 0;
      this.write(active, 'noting a checkpoint', () => this.ledger.clearDeaths(runId));
    }
  }

  private async noteProgress(runId: string, report: WorkerReport): Promise<void> {
    await this.ledger.recordProgress(runId, report.progress, report.diskBytes);
    this.announce.progress(runId, report.progress);
  }

  /** Writes into the ledger how a worker ended, and what becomes of its run. */
  private async settle(runId: string, active: Active, { outcome, how }: WorkerEnd): Promise<void> {
    await this.ledger.recordWorker(runId, null);
    if (outcome && 'progress' in outcome) {
      const progress: Progress = { ...outcome.progress, cellStepsPerSecond: null, secondsLeft: null };
      await this.ledger.recordProgress(runId, progress, outcome.diskBytes);
      this.announce.progress(runId, progress);
    }
    if (outcome?.kind === 'finished') {
      const { fingerprint, stateSha256, lastStep, progress } = outcome;
      const done = await this.ledger.markFinished(runId, { fingerprint, stateSha256, lastStep, progress });
      if (done) this.announce.state(runId, 'finished');
      else await this.resumeRequeued(runId);
    } else if (outcome?.kind === 'failed') {
      await this.fail(runId, outcome.failure);
    } else if (outcome?.kind === 'disk full') {
      this.holdUntil = Date.now() + this.options.diskRetrySeconds * 1000;
      await this.goOnLater(runId, active, 'disk full');
    } else if (outcome?.kind === 'saved' || active.intent === 'stop' || active.intent === 'requeue') {
      await this.goOnLater(runId, active, 'worker died');
    } else if (active.intent === 'close') {
      await this.requeue(runId, 'server stopped');
    } else {
      await this.mournWorker(runId, active, how);
    }
  }

  /** The run is not done: what was ordered has been written already; what was not goes back to the queue. */
  private async goOnLater(runId: string, active: Active, unordered: QueuedReason): Promise<void> {
    if (active.intent === null) await this.requeue(runId, unordered);
    if (active.intent === 'close') await this.requeue(runId, unordered === 'disk full' ? unordered : 'server stopped');
    await this.resumeRequeued(runId);
  }

  private async mournWorker(runId: string, active: Active, how: string): Promise<void> {
    active.deaths = await this.ledger.countDeath(runId);
    if (active.deaths < MAX_DEATHS) {
      await this.requeue(runId, 'worker died');
      await this.resumeRequeued(runId);
      return;
    }
    const last = active.worker.lastProgress;
    await this.fail(runId, {
      cause: 'worker died',
      message: `Its worker died ${active.deaths} times without a new checkpoint; the last one ${how}.`,
      step: last?.step ?? null,
      day: last?.day ?? null,
      place: null,
      lastGoodStep: last?.savedStep ?? null,
    });
  }

  private async fail(runId: string, failure: RunFailure): Promise<void> {
    if (await this.ledger.markFailed(runId, failure)) this.announce.state(runId, 'failed', null, failure);
    else await this.resumeRequeued(runId);
  }

  /** Puts a run that is running back to the front of the queue. */
  private async requeue(runId: string, reason: QueuedReason): Promise<boolean> {
    const done = await this.ledger.markQueued(runId, reason, 'front');
    if (done) this.announce.state(runId, 'queued', reason);
    return done;
  }

  /** Lets better-queue know of a run that waits again. */
  private async resumeRequeued(runId: string): Promise<void> {
    if (this.closing) return;
    if ((await this.ledger.find(runId))?.state === 'queued') this.opened().push({ id: runId });
  }

  private async change(settings: Partial<QueueSettings>): Promise<void> {
    this.settings = { ...this.settings, ...settings };
    await this.ledger.saveSettings(this.settings);
  }

  private write(active: Active, what: string, work: () => Promise<void>): void {
    active.writes = active.writes.then(work).catch((error: unknown) => this.options.log(what, error));
  }

  /** Makes better-queue look whether there is room and work. */
  private nudge(): void {
    if (!this.settings.paused && !this.closing) this.queue?.resume();
  }

  private retryLater(error: unknown): void {
    this.options.log('taking the next run', error);
    setTimeout(() => this.nudge(), 1000).unref();
  }

  private opened(): BetterQueue<RunTask, void> {
    if (!this.queue) throw new Error('The queue has not been started.');
    return this.queue;
  }
}
