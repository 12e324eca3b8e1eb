import { statfs } from 'node:fs/promises';
import { setImmediate as breathe } from 'node:timers/promises';
import { corvaneSetup, Integration, type PreflightContext } from '@halfdeep/ocean';
import { Run } from '@halfdeep/store';

/** Disk that all runs together may take, bytes. */
export const DISK_QUOTA_BYTES = 20e9;
const MEASURE_MS = 300;
const STEPS_A_CHUNK = 20;

/** What this machine allows: its speed as measured, and its disk. */
export class Machine {
  private measured: Promise<number> | null = null;
  private seen: number | null = null;

  constructor(private readonly varDir: string) {}

  /** Cell-steps a second of one worker: the last that a run reached, else what a short trial of the core reached. */
  async cellStepsPerSecond(): Promise<number> {
    if (this.seen !== null) return this.seen;
    this.measured ??= measureSpeed();
    return this.measured;
  }

  /** A worker told how fast it is; the figures of several runs are smoothed. */
  learn(cellStepsPerSecond: number): void {
    if (!(cellStepsPerSecond > 0)) return;
    this.seen = this.seen === null ? cellStepsPerSecond : 0.9 * this.seen + 0.1 * cellStepsPerSecond;
  }

  async disk(): Promise<{ usedBytes: number; quotaBytes: number; freeBytes: number }> {
    const usedBytes = (await Run.sum('diskBytes')) || 0;
    const { bavail, bsize } = await statfs(this.varDir);
    return { usedBytes, quotaBytes: DISK_QUOTA_BYTES, freeBytes: bavail * bsize };
  }

  /** For preflight: what is left of the quota counts, not the quota. */
  async context(): Promise<PreflightContext> {
    const { usedBytes, quotaBytes, freeBytes } = await this.disk();
    return {
      cellStepsPerSecond: await this.cellStepsPerSecond(),
      freeDiskBytes: freeBytes,
      quotaBytes: Math.max(0, quotaBytes - usedBytes),
    };
  }
}

/** Steps the Corvane control for a moment, a few steps at a time so that requests are answered in between. */
async function measureSpeed(): Promise<number> {
  const setup = corvaneSetup();
  const integration = Integration.start({ ...setup, output: { ...setup.output, sections: [], moorings: [] } });
  const { nx, ny } = integration.grid;
  let steps = 0;
  let busyMs = 0;
  integration.advance(STEPS_A_CHUNK); // the first steps pay for compilation
  while (busyMs < MEASURE_MS) {
    await breathe();
    const begin = performance.now();
    integration.advance(STEPS_A_CHUNK);
    busyMs += performance.now() - begin;
    steps += STEPS_A_CHUNK;
  }
  return (1000 * steps * nx * ny) / busyMs;
}
