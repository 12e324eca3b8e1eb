import { type Fingerprint, type Setup } from '@halfdeep/ocean';
import { type Progress, type RunFailure } from '@halfdeep/contracts';

/** What a worker process is asked to compute. Where it starts from, it finds in the run's files. */
export interface WorkerJob {
  runId: string;
  setup: Setup;
  /** Folder that holds `runs/`. */
  varDir: string;
  /** Shortest time between checkpoints, s; the rule is max(this, 20 × what the last one cost). */
  checkpointSeconds: number;
  /** Threads that may step the run: the cores of the machine shared among as many runs as the cap allows, at least 1. */
  threads: number;
}

/** Engine to worker. `save`: write a checkpoint at once and end. */
export type WorkerOrder = { type: 'job'; job: WorkerJob } | { type: 'save' };

/** Worker to engine. A report follows each commit, about once a second; the outcome is the last message. */
export type WorkerMessage =
  | ({ type: 'report' } & WorkerReport)
  | { type: 'checkpoint'; step: number }
  | { type: 'outcome'; outcome: WorkerOutcome };

export interface WorkerReport {
  progress: Progress;
  residentBytes: number;
  cpuSeconds: number;
  /** Bytes of the run's files. */
  diskBytes: number;
}

/** How a job ended. A worker that ends without one has died. */
export type WorkerOutcome =
  | {
      kind: 'finished';
      fingerprint: Fingerprint;
      stateSha256: string;
      lastStep: number;
      progress: Progress;
      diskBytes: number;
    }
  /** Saved on order; goes on from there. */
  | { kind: 'saved'; progress: Progress; diskBytes: number }
  | { kind: 'disk full'; message: string }
  | { kind: 'failed'; failure: RunFailure };
