import { type Fingerprint, type Setup } from '@halfdeep/ocean';
import { type Progress, type QueuedReason, type RunFailure, type RunState } from '@halfdeep/contracts';

/** What an admin set for the queue; kept so that a restarted server goes on with it. */
export interface QueueSettings {
  /** How many runs compute at once, ≥ 1. */
  cap: number;
  /** True: nothing new starts; what runs goes on. */
  paused: boolean;
  /** What happens to running work beyond a lowered cap: it ends by itself, or is checkpointed and requeued at once. */
  whenLowered: 'drain' | 'checkpoint';
}

/** What the queue needs to know about a run. */
export interface LedgerRun {
  runId: string;
  setup: Setup;
  state: RunState;
  queuedReason: QueuedReason | null;
  /** Worker deaths since the last checkpoint landed. */
  deaths: number;
  /** Process that computes it, as far as the ledger knows: after a killed server this may still be alive. */
  workerPid: number | null;
}

/** What a finished run leaves: the fingerprint, and hash and step of the last state, from which it can be extended. */
export interface FinishedRun {
  fingerprint: Fingerprint;
  /** SHA-256 of the last-state file, 64 hex digits: `stateSha256` of a Start of kind `state`. */
  stateSha256: string;
  /** Absolute step of that state. */
  lastStep: number;
  progress: Progress;
}

/**
 * The port through which the queue reads and writes the state of runs. The desk database implements it and is the one
 * truth: every method is one transaction, and each `mark…` resolves to false, changing nothing, when the run is gone or
 * in a state from which the change is not allowed (the comment names the states it may come from).
 */
export interface RunLedger {
  settings(): Promise<QueueSettings>;
  saveSettings(settings: QueueSettings): Promise<void>;

  find(runId: string): Promise<LedgerRun | null>;
  /** Queued runs, next first. */
  waiting(): Promise<LedgerRun[]>;
  /** Runs that the ledger holds as running; after a kill of the server these are the orphans. */
  running(): Promise<LedgerRun[]>;

  /**
   * Takes the first waiting run: queued → running in one transaction, with `startedAt` set when it was null,
   * `queuedReason` and any earlier failure cleared. Null when nothing waits.
   */
  claimNext(): Promise<LedgerRun | null>;
  /**
   * Back to queued. Place `front`: from running only, before everything that waits (the machine put it back, and it goes
   * on first). Place `back`: from stopped or failed, by the fair order between owners (a person resumed it), with the
   * count of deaths cleared. Clears workerPid, endedAt and the failure.
   */
  markQueued(runId: string, reason: QueuedReason | null, place: 'front' | 'back'): Promise<boolean>;
  /** running or stopped (it reached its end while the stop was on its way) → finished; sets endedAt, clears workerPid. */
  markFinished(runId: string, finished: FinishedRun): Promise<boolean>;
  /** running or queued → stopped; sets endedAt. */
  markStopped(runId: string): Promise<boolean>;
  /** running or queued → failed; sets endedAt, clears workerPid. */
  markFailed(runId: string, failure: RunFailure): Promise<boolean>;

  /** The process that computes a run, or null when it has ended. */
  recordWorker(runId: string, pid: number | null): Promise<void>;
  /** Any state: progress of a run, about once a second while it runs; `diskBytes` when it is known. */
  recordProgress(runId: string, progress: Progress, diskBytes: number | null): Promise<void>;
  /** One more worker death without a new checkpoint; resolves to the count. */
  countDeath(runId: string): Promise<number>;
  /** A new checkpoint has landed: deaths start from 0 again. */
  clearDeaths(runId: string): Promise<void>;

  /** Puts waiting runs in this order; ids that do not wait are skipped, waiting ones left out keep their order behind. */
  reorder(runIds: readonly string[]): Promise<void>;
}
