import { type Observable } from 'rxjs';
import {
  type Progress,
  type QueuedReason,
  type QueueSummary,
  type RunFailure,
  type RunState,
} from '@halfdeep/contracts';

/** What the queue tells while it works. The ledger has been written before an event is sent. */
export type RunQueueEvent =
  | { type: 'state'; runId: string; state: RunState; queuedReason: QueuedReason | null; failure: RunFailure | null }
  | { type: 'progress'; runId: string; progress: Progress }
  | { type: 'records'; runId: string; records: Progress['records'] }
  | { type: 'queue'; queue: QueueSummary };

/** A running worker process, as the admin's screen lists it. */
export interface QueueWorker {
  pid: number;
  runId: string;
  startedAt: Date;
  lastHeardAt: Date;
  residentBytes: number | null;
  cpuSeconds: number | null;
  cellStepsPerSecond: number | null;
  /** Deaths of this run's workers since its last checkpoint. */
  deaths: number;
}

/**
 * Computes runs, a few at a time. Narrow on purpose: the embedded engine forks workers on this machine, a shared engine
 * with workers on other hosts can take its place. Run state is read and written only through the `RunLedger`.
 */
export interface RunQueue {
  /** Never errors, never completes before `close`. */
  readonly events$: Observable<RunQueueEvent>;

  /** Takes up what the ledger holds: orphans of a killed server are requeued as "server stopped", then work begins. */
  start(): Promise<void>;
  /** A run was written to the ledger as queued (new, or resumed): compute it when its turn comes. */
  enqueue(runId: string): Promise<void>;
  /**
   * Marks a queued or running run stopped, at once; a running worker then saves its state and ends. False when the run
   * was neither.
   */
  stop(runId: string): Promise<boolean>;
  /** Resolves when no worker holds the run's files any more: before deleting them. */
  released(runId: string): Promise<void>;
  /** How many runs compute at once, from now on. RangeError outside 1 … maxCap. */
  setCap(cap: number, whenLowered: 'drain' | 'checkpoint'): Promise<void>;
  /** Largest cap that this engine takes. */
  readonly maxCap: number;
  setPaused(paused: boolean): Promise<void>;
  /** Puts waiting runs in this order. */
  reorder(runIds: readonly string[]): Promise<void>;
  summary(): Promise<QueueSummary>;
  workers(): QueueWorker[];
  /** Checkpoints all running work, requeues it as "server stopped", ends the workers and completes `events$`. */
  close(): Promise<void>;
}
