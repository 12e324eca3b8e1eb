export type * from './run-ledger';
export type * from './run-queue';
export type * from './worker-messages';
export { EmbeddedQueue, type EmbeddedQueueOptions } from './embedded-queue';
export type { WorkerEntry } from './worker-process';
