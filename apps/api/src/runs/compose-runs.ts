import { availableParallelism } from 'node:os';
import { EmbeddedQueue, type RunQueue, type WorkerEntry } from '@halfdeep/queue';
import { RunFileCache, type DeskDatabase } from '@halfdeep/store';
import { filter, map } from 'rxjs';
import { AdminQueueService } from '../admin-queue/admin-queue-service';
import { type AuditTrail } from '../audit/audit-trail';
import { ConvergenceService } from '../convergence/convergence-service';
import { DeskService } from '../desk/desk-service';
import { EventHub } from '../events/event-hub';
import { WatermarkWatch } from '../events/watermark-watch';
import { ExperimentService } from '../experiments/experiment-service';
import { SideBySideService } from '../side-by-side/side-by-side-service';
import { SliceService } from '../slices/slice-service';
import { DeskRunLedger } from './desk-run-ledger';
import { Machine } from './machine';
import { RunExports } from './run-exports';
import { RunService } from './run-service';
import { SetupCheck } from './setup-check';
import { workerEntry } from './worker-entry';

export interface RunParts {
  desk: DeskDatabase;
  audit: AuditTrail;
  /** Folder that holds `runs/`; absolute. */
  varFolder: string;
  /** Told of what fails behind the answers, with what was tried. */
  failed: (what: string, error: unknown) => void;
  /** For tests: another worker, more or less frequent checkpoints. */
  worker?: WorkerEntry;
  checkpointSeconds?: number;
}

/** Everything about experiments and runs, composed; the queue is not started yet. */
export interface RunServices {
  queue: RunQueue;
  machine: Machine;
  check: SetupCheck;
  runs: RunService;
  exports: RunExports;
  experiments: ExperimentService;
  slices: SliceService;
  sideBySide: SideBySideService;
  convergence: ConvergenceService;
  events: EventHub;
  deskService: DeskService;
  adminQueue: AdminQueueService;
  failed: RunParts['failed'];
  /** Takes up queued and interrupted work. */
  start(): Promise<void>;
  /** Saves all running work, ends the event streams and closes the run files. */
  close(): Promise<void>;
}

/** Composes the services of experiments and runs on an open desk database. */
export function composeRuns({ desk, audit, varFolder, failed, worker, checkpointSeconds }: RunParts): RunServices {
  const ledger = new DeskRunLedger(desk, { cap: availableParallelism(), paused: false, whenLowered: 'drain' });
  const queue = new EmbeddedQueue({
    ledger,
    varDir: varFolder,
    worker: worker ?? workerEntry(),
    checkpointSeconds,
    log: (what, error) => failed(`queue: ${what}`, error),
  });
  const files = new RunFileCache();
  const machine = new Machine(varFolder);
  const check = new SetupCheck(machine);
  const runs = new RunService({ desk, audit, ledger, queue, files, check, varDir: varFolder });
  const slices = new SliceService(files, varFolder);
  const watermarks = new WatermarkWatch({
    queue,
    files,
    varDir: varFolder,
    failed: (error) => failed('reading watermarks', error),
  });
  queue.events$
    .pipe(
      map((event) => (event.type === 'progress' ? event.progress.cellStepsPerSecond : null)),
      filter((speed) => speed !== null),
    )
    .subscribe((speed) => machine.learn(speed));
  return {
    queue,
    machine,
    check,
    runs,
    exports: new RunExports(varFolder),
    experiments: new ExperimentService(desk),
    slices,
    sideBySide: new SideBySideService(files, varFolder),
    convergence: new ConvergenceService({ runs, check, slices }),
    events: new EventHub(queue, watermarks),
    deskService: new DeskService(desk, queue, machine),
    adminQueue: new AdminQueueService({ queue, ledger, desk, audit }),
    failed,
    start: () => queue.start(),
    close: async () => {
      await queue.close();
      await files.close();
    },
  };
}
