import type { RunLedger } from './run-ledger';
import type { WorkerEntry } from './worker-process';

export interface EmbeddedQueueOptions {
  ledger: RunLedger;
  /** Folder that holds `runs/`. */
  varDir: string;
  worker: WorkerEntry;
  /** Shortest time between checkpoints, s. Default 20; HALFDEEP_CHECKPOINT_SECONDS overrides it. */
  checkpointSeconds?: number;
  /** Pause before work is tried again after the disk was full, s. Default 30. */
  diskRetrySeconds?: number;
  /** How long a worker may take to save when the queue closes, s; then it is killed. Default 30. */
  closeSeconds?: number;
  /** Told of errors of the ledger, with what was tried. Default: one line on standard error. */
  log?: (what: string, error: unknown) => void;
}

/** Every option with its default. RangeError when the environment asks for a pause that is no number of seconds. */
export function withDefaults(options: EmbeddedQueueOptions): Required<EmbeddedQueueOptions> {
  return {
    ...options,
    checkpointSeconds: options.checkpointSeconds ?? checkpointSecondsFromEnvironment(),
    diskRetrySeconds: options.diskRetrySeconds ?? 30,
    closeSeconds: options.closeSeconds ?? 30,
    log: options.log ?? logOnStandardError,
  };
}

function checkpointSecondsFromEnvironment(): number {
  const text = process.env['HALFDEEP_CHECKPOINT_SECONDS'] ?? '20';
  const seconds = Number(text);
  if (text.trim() === '' || !(seconds > 0))
    throw new RangeError(`HALFDEEP_CHECKPOINT_SECONDS must be a number of seconds above 0; “${text}” arrived.`);
  return seconds;
}

function logOnStandardError(what: string, error: unknown): void {
  process.stderr.write(`Queue: ${what}: ${error instanceof Error ? error.message : String(error)}\n`);
}
