import { setPriority } from 'node:os';
import type { WorkerMessage, WorkerOrder } from '@halfdeep/queue';
import { describeFailure } from './replay';
import { RunJob, type RunJobOptions } from './run-job';

/**
 * Makes this process a worker: it takes one job over IPC, computes it, tells how it ended, and exits. It saves and ends
 * when it is ordered to, on SIGTERM, and when its parent is gone.
 */
export function serveJob(options: Pick<RunJobOptions, 'pause'> = {}): void {
  if (!process.send) {
    process.stderr.write(
      'A worker is started by the queue, which gives it a job over IPC; it does nothing by itself.\n',
    );
    process.exit(2);
  }
  let job: RunJob | null = null;
  const save = () => {
    if (job) job.orderSave();
    else process.exit(0);
  };
  process.on('message', (order: WorkerOrder) => {
    if (order.type === 'save') return save();
    if (job) return;
    job = new RunJob(order.job, { ...options, report: (message) => void tell(message) });
    void computeAndExit(job);
  });
  // The server and its pages go before the arithmetic.
  setPriority(10);
  process.on('disconnect', save);
  process.on('SIGTERM', save);
  // Ctrl-C reaches the whole group of processes; the server then orders its workers to save.
  process.on('SIGINT', () => undefined);
}

async function computeAndExit(job: RunJob): Promise<void> {
  try {
    await tell({ type: 'outcome', outcome: await job.run() });
    process.exit(0);
  } catch (error) {
    const message = error instanceof Error ? error.message : String(error);
    process.stderr.write(`${error instanceof Error ? error.stack : message}\n`);
    const failure = describeFailure('internal', `The worker met an error it does not know: ${message}`, null);
    await tell({ type: 'outcome', outcome: { kind: 'failed', failure } });
    process.exit(1);
  }
}

/** Resolves when the message has left this process, or cannot any more because the parent is gone. */
function tell(message: WorkerMessage): Promise<void> {
  return new Promise((resolve) => {
    if (!process.send || !process.connected) resolve();
    else process.send(message, undefined, {}, () => resolve());
  });
}
