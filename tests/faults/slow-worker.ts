import { appendFileSync } from 'node:fs';
import { setTimeout as sleep } from 'node:timers/promises';
import type { WorkerMessage, WorkerOrder } from '@halfdeep/queue';
import { serveJob } from '../../worker/src/serve-job';

// The worker itself, resting between slices of steps, so that a run of a second's work lasts long enough to be disturbed.
// TEST_TRACE names a file to which it writes what it tells, for tests that cannot listen to the queue.
const pauseMs = Number(process.env['TEST_PAUSE_MS'] ?? 0);
const trace = process.env['TEST_TRACE'];
if (trace) {
  let runId = '';
  process.on('message', (order: WorkerOrder) => {
    if (order.type === 'job') runId = order.job.runId;
  });
  const send = process.send!.bind(process) as (...all: unknown[]) => boolean;
  process.send = ((message: WorkerMessage, ...rest: unknown[]) => {
    if (message.type === 'report') {
      const { step, savedStep, records } = message.progress;
      const line = { pid: process.pid, at: Date.now(), runId, step, savedStep, frames: records.frames };
      appendFileSync(trace, `${JSON.stringify(line)}\n`);
    }
    return send(message, ...rest);
  }) as typeof process.send;
}
serveJob({ pause: () => (pauseMs > 0 ? sleep(pauseMs) : Promise.resolve()) });
