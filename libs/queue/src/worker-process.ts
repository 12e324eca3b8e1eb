import { type ChildProcess, fork } from 'node:child_process';
import type { Progress } from '@halfdeep/contracts';
import type { QueueWorker } from './run-queue';
import type { WorkerJob, WorkerMessage, WorkerOrder, WorkerOutcome, WorkerReport } from './worker-messages';

/** How to start a worker: dist/worker/main.js, or worker/src/main.ts with execArgv ['--import', 'tsx']. */
export interface WorkerEntry {
  /** Absolute path of the script. */
  path: string;
  execArgv?: readonly string[];
  /** Added to this process's environment. */
  env?: Readonly<Record<string, string>>;
}

/** How a worker process ended: with an outcome, or without one, which is a death. */
export interface WorkerEnd {
  outcome: WorkerOutcome | null;
  /** In words: "was killed by SIGKILL", "ended with code 134 (… last words …)". */
  how: string;
}

const LAST_WORDS = 2000;

/** One forked worker with one job. */
export class WorkerProcess {
  readonly startedAt = new Date();
  /** Resolves when the process is gone; never rejects. */
  readonly ended: Promise<WorkerEnd>;
  private readonly child: ChildProcess;
  private lastHeardAt = new Date();
  private report: WorkerReport | null = null;
  private outcome: WorkerOutcome | null = null;
  private lastWords = '';

  constructor(
    readonly job: WorkerJob,
    entry: WorkerEntry,
    private readonly onMessage: (message: WorkerMessage) => void,
  ) {
    this.child = fork(entry.path, [], {
      execArgv: [...(entry.execArgv ?? [])],
      env: { ...process.env, ...entry.env },
      stdio: ['ignore', 'inherit', 'pipe', 'ipc'],
    });
    this.child.stderr?.setEncoding('utf8').on('data', (text: string) => {
      process.stderr.write(text);
      this.lastWords = (this.lastWords + text).slice(-LAST_WORDS);
    });
    this.child.on('message', (message: WorkerMessage) => this.hear(message));
    this.ended = new Promise((resolve) => {
      let failedToStart = '';
      this.child.on('error', (error) => {
        failedToStart = error.message;
        if (this.child.pid === undefined) resolve({ outcome: null, how: `could not be started: ${error.message}` });
      });
      this.child.on('close', (code, signal) => {
        const words = this.lastWords.trim().split('\n').slice(-3).join(' ').slice(-300) || failedToStart;
        const how = signal ? `was killed by ${signal}` : `ended with code ${code}`;
        resolve({ outcome: this.outcome, how: words ? `${how} (${words})` : how });
      });
    });
    this.send({ type: 'job', job });
  }

  get pid(): number | undefined {
    return this.child.pid;
  }

  /** What it told last; null before the first report. */
  get lastProgress(): Progress | null {
    return this.report?.progress ?? null;
  }

  /** Orders it to write a checkpoint at once and to end. */
  save(): void {
    this.send({ type: 'save' });
  }

  kill(): void {
    this.child.kill('SIGKILL');
  }

  info(deaths: number): QueueWorker {
    return {
      pid: this.pid ?? 0,
      runId: this.job.runId,
      startedAt: this.startedAt,
      lastHeardAt: this.lastHeardAt,
      residentBytes: this.report?.residentBytes ?? null,
      cpuSeconds: this.report?.cpuSeconds ?? null,
      cellStepsPerSecond: this.report?.progress.cellStepsPerSecond ?? null,
      deaths,
    };
  }

  private hear(message: WorkerMessage): void {
    this.lastHeardAt = new Date();
    if (message.type === 'report') this.report = message;
    if (message.type === 'outcome') this.outcome = message.outcome;
    this.onMessage(message);
  }

  /** A worker that is gone cannot take an order; how it ended is told by `ended`. */
  private send(order: WorkerOrder): void {
    if (this.child.connected) this.child.send(order, () => undefined);
  }
}
