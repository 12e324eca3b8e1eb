import { type Observable, Subject } from 'rxjs';
import type { Progress, QueuedReason, QueueSummary, RunFailure, RunState } from '@halfdeep/contracts';
import type { RunQueueEvent } from './run-queue';

/** Tells the events of a queue, each after the ledger has been written. */
export class QueueAnnouncer {
  readonly events$: Observable<RunQueueEvent>;
  private readonly events = new Subject<RunQueueEvent>();
  /** Records told last, by run. */
  private readonly told = new Map<string, string>();
  private telling: Promise<void> = Promise.resolve();

  constructor(
    private readonly summary: () => Promise<QueueSummary>,
    private readonly onError: (error: unknown) => void,
  ) {
    this.events$ = this.events.asObservable();
  }

  /** A run has come into a state; the numbers of the queue follow. */
  state(
    runId: string,
    state: RunState,
    queuedReason: QueuedReason | null = null,
    failure: RunFailure | null = null,
  ): void {
    if (state !== 'running') this.told.delete(runId);
    this.events.next({ type: 'state', runId, state, queuedReason, failure });
    void this.queue();
  }

  /** Progress, and the records when there are other ones than told before. */
  progress(runId: string, progress: Progress): void {
    this.events.next({ type: 'progress', runId, progress });
    const records = JSON.stringify(progress.records);
    if (records === this.told.get(runId)) return;
    this.told.set(runId, records);
    this.events.next({ type: 'records', runId, records: progress.records });
  }

  /** The numbers of the queue, counted after all that was told before. */
  queue(): Promise<void> {
    this.telling = this.telling
      .then(async () => this.events.next({ type: 'queue', queue: await this.summary() }))
      .catch(this.onError);
    return this.telling;
  }

  /** Waits for the last count, then ends the stream. */
  async complete(): Promise<void> {
    await this.telling;
    this.events.complete();
  }
}
