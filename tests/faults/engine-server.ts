import { join } from 'node:path';
import { EmbeddedQueue } from '@halfdeep/queue';
import { openDesk } from '@halfdeep/store';
import { DeskRunLedger } from '../../apps/api/src/runs/desk-run-ledger';

// The server without its HTTP side: desk database and queue in one process, to be killed. Arguments: var folder, worker.
const [varDir, worker] = process.argv.slice(2);
const desk = await openDesk(join(varDir, 'desk.sqlite'));
const ledger = new DeskRunLedger(desk, { cap: 2, paused: false, whenLowered: 'drain' });
const queue = new EmbeddedQueue({ ledger, varDir, worker: { path: worker }, checkpointSeconds: 0.2 });
queue.events$.subscribe((event) => {
  if (event.type !== 'queue') process.send?.(event);
});
await queue.start();
process.on('SIGTERM', () => {
  void queue
    .close()
    .then(() => desk.close())
    .then(() => process.exit(0));
});
