import type BetterQueue from 'better-queue';
import type { LedgerRun, RunLedger } from './run-ledger';

/** A task of the queue: the id of a run, and the run itself once it has been claimed. */
export interface RunTask {
  id: string;
  run?: LedgerRun;
}

type Done<T> = (error: unknown, value?: T) => void;

/**
 * The store of better-queue on the run ledger. What waits and in which order, the ledger says; taking a task claims the
 * first waiting run there. Only the locks of tasks being worked on are kept here: the ledger knows them as running runs,
 * and the engine puts those of a killed server back before it opens the queue.
 */
export class LedgerStore implements BetterQueue.Store<RunTask> {
  /** Runs that the queue counts as waiting. */
  private readonly counted = new Set<string>();
  private readonly locks = new Map<string, Record<string, RunTask>>();
  private lastLock = 0;

  constructor(
    private readonly ledger: Pick<RunLedger, 'waiting' | 'claimNext'>,
    private readonly onClaim: (run: LedgerRun) => void,
    private readonly onError: (error: unknown) => void,
  ) {}

  connect(done: (error: unknown, length: number) => void): void {
    this.ledger.waiting().then(
      (runs) => {
        for (const run of runs) this.counted.add(run.runId);
        done(null, runs.length);
      },
      (error: unknown) => {
        this.onError(error);
        done(error, 0);
      },
    );
  }

  /** Better-queue asks for it on connecting, to take up tasks again; here the engine has put those back already. */
  getRunningTasks(done: Done<Record<string, Record<string, RunTask>>>): void {
    done(null, Object.fromEntries(this.locks));
  }

  getTask(id: string, done: (error: unknown, task: RunTask) => void): void {
    done(null, (this.counted.has(id) ? { id } : undefined) as RunTask);
  }

  deleteTask(id: string, done: () => void): void {
    this.counted.delete(id);
    done();
  }

  putTask(id: string, _task: RunTask, _priority: number, done: (error: unknown) => void): void {
    this.counted.add(id);
    done(null);
  }

  takeFirstN(_n: number, done: (error: unknown, lockId: string) => void): void {
    this.ledger.claimNext().then(
      (run) => {
        if (!run) return done(null, undefined as unknown as string);
        this.counted.delete(run.runId);
        const lockId = String(++this.lastLock);
        this.locks.set(lockId, { [run.runId]: { id: run.runId, run } });
        this.onClaim(run);
        done(null, lockId);
      },
      (error: unknown) => {
        this.onError(error);
        done(error, undefined as unknown as string);
      },
    );
  }

  takeLastN(n: number, done: (error: unknown, lockId: string) => void): void {
    this.takeFirstN(n, done);
  }

  getLock(lockId: string, done: (error: unknown, tasks: Record<string, RunTask>) => void): void {
    done(null, this.locks.get(lockId) ?? {});
  }

  releaseLock(lockId: string, done: (error: unknown) => void): void {
    this.locks.delete(lockId);
    done(null);
  }
}
