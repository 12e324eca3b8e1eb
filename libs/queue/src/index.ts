export type * from './run-ledger';
export type * from './run-queue';
