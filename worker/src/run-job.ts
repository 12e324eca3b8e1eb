import { stat } from 'node:fs/promises';
import { setImmediate as breathe } from 'node:timers/promises';
import { Integration, IntegrationFailure, type StepperOptions } from '@halfdeep/ocean';
import { type Progress } from '@halfdeep/contracts';
import type { WorkerJob, WorkerMessage, WorkerOutcome } from '@halfdeep/queue';
import {
  listRunFiles,
  readVerified,
  RunFileError,
  RunFileWriter,
  type RunPaths,
  runPaths,
  StateFileError,
  writeWhole,
} from '@halfdeep/store';
import { isDamagedFile, isDiskFull } from './disk-errors';
import { describeFailure, replayFailure } from './replay';
import { RunLock } from './run-lock';
import { metaOf } from './run-meta';
import { Speedometer } from './speedometer';
import { WorkerThreadTeam } from './team/thread-team';

/** Orders are looked at, and the event loop turns, about this often. */
const SLICE_MS = 25;
const COMMIT_MS = 1000;
/** Records wait in memory up to this many bytes; then the integration waits for the disk. */
const PENDING_BYTES = 64e6;

export interface RunJobOptions {
  report?: (message: WorkerMessage) => void;
  /** Called between slices of steps: a test slows a run down with it. */
  pause?: () => Promise<void>;
}

/**
 * One run from where its files stand to its end, or to the order to save. Every record goes to the run file as soon as
 * its step is complete; the file, the checkpoints and the last state are what this leaves.
 */
export class RunJob {
  private readonly paths: RunPaths;
  private readonly stepping: StepperOptions;
  private saveOrdered = false;
  private integration!: Integration;
  private writer!: RunFileWriter;
  private savedStep: number | null = null;
  private readonly speed = new Speedometer();
  private lastCommit = performance.now();
  private lastCheckpoint = performance.now();
  private checkpointCostMs = 0;
  private stepMs = 0;
  /** The commit or checkpoint that is on its way to the disk while steps go on. */
  private writing: Promise<void> | null = null;
  private writeError: unknown = null;

  constructor(
    private readonly job: WorkerJob,
    private readonly options: RunJobOptions = {},
  ) {
    this.paths = runPaths(job.varDir, job.runId);
    this.stepping = job.threads > 1 ? { team: new WorkerThreadTeam(job.threads) } : {};
  }

  /** Save and end, as soon as the step that is being computed is complete. */
  orderSave(): void {
    this.saveOrdered = true;
  }

  /** Computes. Resolves to how it ended; rejects with whatever is neither the run's nor the disk's fault. */
  async run(): Promise<WorkerOutcome> {
    const lock = await RunLock.acquire(this.paths.lock);
    try {
      return await this.compute();
    } catch (error) {
      if (isDiskFull(error))
        return { kind: 'disk full', message: `No space is left for the results of this run: ${String(error)}` };
      if (error instanceof StateFileError || error instanceof RunFileError || isDamagedFile(error))
        return { kind: 'failed', failure: describeFailure('result lost', (error as Error).message, null) };
      throw error;
    } finally {
      await this.writing;
      this.integration?.dismissThreads();
      await this.writer?.close();
      await lock.release();
    }
  }

  private async compute(): Promise<WorkerOutcome> {
    await this.takeUp();
    this.speed.mark(this.integration.step, performance.now());
    await this.tell();
    try {
      while (this.integration.step < this.integration.totalSteps) {
        if (this.saveOrdered) return await this.save();
        await this.slice();
      }
    } catch (error) {
      if (error instanceof IntegrationFailure) return await this.explain();
      throw error;
    }
    return await this.finish();
  }

  /** Opens the run file and goes back to the newest checkpoint that is whole, else to the start. */
  private async takeUp(): Promise<void> {
    const fresh = await this.startAnew();
    this.writer = await RunFileWriter.open(this.paths, metaOf(this.job.runId, fresh));
    const restored = await this.restoreNewest();
    this.integration = restored ?? fresh;
    this.savedStep = restored?.step ?? null;
    await this.writer.rewindTo(restored?.step ?? fresh.startStep - 1);
    if (!restored) this.writer.addFrame(fresh.frame());
  }

  /**
   * The newest checkpoint that is whole; null when there is none. A lost or damaged one, or one of another core, is passed
   * over: from the one before it, or from the start, the run comes to the same bits.
   */
  private async restoreNewest(): Promise<Integration | null> {
    for (const entry of await this.writer.checkpoints()) {
      try {
        const bytes = await readVerified(entry.path, entry.sha256, `checkpoint of step ${entry.step}`);
        return Integration.restore(this.job.setup, bytes, this.stepping);
      } catch (error) {
        if (!(error instanceof StateFileError || error instanceof RangeError)) throw error;
        process.stderr.write(`Run ${this.job.runId}: checkpoint of step ${entry.step} passed over: ${error.message}\n`);
      }
    }
    return null;
  }

  private async startAnew(): Promise<Integration> {
    const { setup } = this.job;
    if (setup.start.kind !== 'state') return Integration.start(setup, undefined, this.stepping);
    const { stateSha256 } = setup.start;
    const state = await readVerified(this.paths.start, stateSha256, 'start state of this run');
    return Integration.start(setup, state, this.stepping);
  }

  /** Steps for about `SLICE_MS`, delivers what falls due, and lets orders, commits and checkpoints have their turn. */
  private async slice(): Promise<void> {
    const { integration, writer } = this;
    const began = performance.now();
    do {
      const { step, startStep, totalSteps } = integration;
      const untilRecord = Object.values(writer.meta.intervals).map((every) => every - ((step - startStep) % every));
      const affordable = this.stepMs > 0 ? Math.max(1, Math.floor(SLICE_MS / this.stepMs)) : 1;
      const steps = Math.min(totalSteps - step, affordable, ...untilRecord);
      const before = performance.now();
      integration.advance(steps);
      const took = performance.now() - before;
      this.stepMs = this.stepMs === 0 ? took / steps : 0.8 * this.stepMs + (0.2 * took) / steps;
      this.deliver();
    } while (
      performance.now() - began < SLICE_MS &&
      integration.step < integration.totalSteps &&
      writer.pendingBytes < PENDING_BYTES
    );
    this.speed.mark(integration.step, performance.now());
    this.startWriting();
    if (writer.pendingBytes >= PENDING_BYTES) {
      await this.written();
      this.startWriting(true);
    }
    if (this.writeError) throw this.writeError as Error;
    await this.options.pause?.();
    await breathe();
  }

  /** Adds the records that the present step completes. */
  private deliver(): void {
    const { integration, writer } = this;
    const { intervals, startStep } = writer.meta;
    const done = integration.step - startStep;
    if (done % intervals.frames === 0) writer.addFrame(integration.frame());
    if (done % intervals.sections === 0) writer.addRecord('sections', integration.takeSections());
    if (done % intervals.moorings === 0) writer.addRecord('moorings', integration.takeMoorings());
    if (done % intervals.budget === 0) writer.addRecord('budget', integration.takeBudget());
  }

  /** Begins a checkpoint or a commit when one is due and none is on its way. */
  private startWriting(now = false): void {
    if (this.writing) return;
    const pause = Math.max(this.job.checkpointSeconds * 1000, 20 * this.checkpointCostMs);
    if (performance.now() - this.lastCheckpoint >= pause) this.inBackground(() => this.checkpoint());
    else if (now || performance.now() - this.lastCommit >= COMMIT_MS)
      this.inBackground(async () => {
        await this.writer.commit();
        this.lastCommit = performance.now();
        await this.tell();
      });
  }

  private inBackground(work: () => Promise<void>): void {
    this.writing = work()
      .catch((error: unknown) => {
        this.writeError ??= error;
      })
      .finally(() => {
        this.writing = null;
      });
  }

  /** Waits for the write that is on its way; throws what went wrong with it. */
  private async written(): Promise<void> {
    await this.writing;
    if (this.writeError) throw this.writeError as Error;
  }

  private async checkpoint(): Promise<void> {
    const before = performance.now();
    const { step } = this.integration;
    await this.writer.saveCheckpoint(step, this.integration.checkpoint());
    this.savedStep = step;
    this.lastCheckpoint = this.lastCommit = performance.now();
    this.checkpointCostMs = this.lastCheckpoint - before;
    this.options.report?.({ type: 'checkpoint', step });
    await this.tell();
  }

  private async save(): Promise<WorkerOutcome> {
    await this.written();
    await this.checkpoint();
    return { kind: 'saved', progress: this.progress(), diskBytes: await this.diskBytes() };
  }

  private async finish(): Promise<WorkerOutcome> {
    await this.written();
    await this.checkpoint();
    const stateSha256 = await writeWhole(this.paths.last, this.integration.lastState());
    return {
      kind: 'finished',
      fingerprint: this.integration.fingerprint(),
      stateSha256,
      lastStep: this.integration.step,
      progress: { ...this.progress(), cellStepsPerSecond: null, secondsLeft: null },
      diskBytes: await this.diskBytes(),
    };
  }

  /** Finds the first bad step by replaying from the last checkpoint, and forgets the records from there on. */
  private async explain(): Promise<WorkerOutcome> {
    await this.written();
    const replay = (await this.restoreNewest()) ?? (await this.startAnew());
    const report = await replayFailure(replay, () => this.saveOrdered);
    if (!report) return { kind: 'saved', progress: this.progress(), diskBytes: await this.diskBytes() };
    await this.writer.commit();
    await this.writer.rewindTo(report.step - 1);
    await this.tell();
    return { kind: 'failed', failure: describeFailure(report.cause, report.message, report) };
  }

  private async tell(): Promise<void> {
    const { user, system } = process.cpuUsage();
    this.options.report?.({
      type: 'report',
      progress: this.progress(),
      residentBytes: process.memoryUsage.rss(),
      cpuSeconds: (user + system) / 1e6,
      diskBytes: await this.diskBytes(),
    });
  }

  /** The records are those that a reader finds in the file. */
  private progress(): Progress {
    const { step, startStep, totalSteps, grid, setup } = this.integration;
    const rate = this.speed.stepsPerSecond();
    return {
      step,
      totalSteps,
      startStep,
      day: step / setup.numerics.stepsPerDay,
      totalDays: totalSteps / setup.numerics.stepsPerDay,
      cellStepsPerSecond: rate === null ? null : rate * grid.nx * grid.ny,
      secondsLeft: rate ? (totalSteps - step) / rate : null,
      records: this.writer.committed,
      savedStep: this.savedStep,
      cautions: this.integration.cautions().map((caution) => caution.message),
    };
  }

  private async diskBytes(): Promise<number> {
    let bytes = 0;
    for (const file of await listRunFiles(this.paths)) bytes += (await stat(file).catch(() => null))?.size ?? 0;
    return bytes;
  }
}
