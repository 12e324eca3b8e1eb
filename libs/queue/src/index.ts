export type * from './run-ledger';
export type * from './run-queue';
export type * from './worker-messages';
export { EmbeddedQueue } from './embedded-queue';
export type { EmbeddedQueueOptions } from './queue-options';
export type { WorkerEntry } from './worker-process';
