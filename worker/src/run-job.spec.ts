import { mkdtemp, readdir, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, expect, it, vi } from 'vitest';
import { corvaneSetup, Integration, recordSteps, type Setup } from '@halfdeep/ocean';
import type { WorkerMessage, WorkerOutcome } from '@halfdeep/queue';
import { readVerified, RunFileReader, RunFileWriter, runPaths, sha256Of } from '@halfdeep/store';
import { isDiskFull } from './disk-errors';
import { RunJob } from './run-job';
import { Speedometer } from './speedometer';

// The machine may be busy: none of these measures time.
vi.setConfig({ testTimeout: 60_000 });

let varDir: string;
beforeEach(async () => {
  varDir = await mkdtemp(join(tmpdir(), 'run-job-'));
});
afterEach(async () => {
  vi.restoreAllMocks();
  await rm(varDir, { recursive: true, force: true });
});

function smallSetup(days: number): Setup {
  const setup = corvaneSetup();
  Object.assign(setup.basin, { eastDeg: 20, southDeg: -6, northDeg: 6, islands: [] });
  setup.basin.westernCoast = { kind: 'rectangular' };
  Object.assign(setup.numerics, { spacingLongitudeDeg: 1, spacingLatitudeDeg: 1 });
  setup.length.days = days;
  setup.output = {
    sections: [{ name: 'Equator', along: 'latitude', atDeg: 0 }],
    moorings: [{ name: 'West', longitudeDeg: 2.5, latitudeDeg: 1.5 }],
    frameIntervalDays: 1.25,
    sectionIntervalDays: 0.5,
    mooringIntervalDays: 0.25,
    momentumBudget: false,
    vorticityBudget: false,
  };
  return setup;
}

const jobOf = (setup: Setup, checkpointSeconds = 600) => ({
  runId: 'r',
  setup,
  varDir,
  checkpointSeconds,
  threads: 1,
});
/** Stands for all bits of an array: comparing hashes is much faster than comparing numbers. */
const bits = (data: Float32Array | Float64Array) =>
  sha256Of(new Uint8Array(data.buffer, data.byteOffset, data.byteLength));
type Finished = Extract<WorkerOutcome, { kind: 'finished' }>;

it('delivers exactly what the integration gives at the steps of each stream', async () => {
  const setup = smallSetup(40);
  const outcome = (await new RunJob(jobOf(setup)).run()) as Finished;
  const direct = Integration.start(setup);
  const every = recordSteps(setup);
  const reader = await RunFileReader.open(runPaths(varDir, 'r').file);
  expect(bits((await reader.readMap('eta', 0)).data)).toBe(bits(direct.frame().eta));
  let [frames, sections, moorings] = [1, 0, 0];
  while (direct.step < direct.totalSteps) {
    direct.advance(1);
    if (direct.step % every.frames === 0) {
      const frame = direct.frame();
      for (const variable of ['eta', 'u', 'v'] as const)
        expect(bits((await reader.readMap(variable, frames)).data)).toBe(bits(frame[variable]));
      frames++;
    }
    if (direct.step % every.sections === 0) {
      expect(bits((await reader.readSeries('sections', sections, sections + 1)).data)).toBe(
        bits(direct.takeSections()),
      );
      expect(bits((await reader.readSeries('budget', sections, sections + 1)).data)).toBe(bits(direct.takeBudget()));
      sections++;
    }
    if (direct.step % every.moorings === 0) {
      expect(bits((await reader.readSeries('moorings', moorings, moorings + 1)).data)).toBe(
        bits(direct.takeMoorings()),
      );
      moorings++;
    }
  }
  expect(outcome.progress.records).toEqual({ frames, sections, moorings, budget: sections });
  expect([frames, sections, moorings]).toEqual([33, 80, 160]);
  expect(outcome.fingerprint).toEqual(direct.fingerprint());
  const last = await readVerified(runPaths(varDir, 'r').last, outcome.stateSha256, 'last state');
  expect(sha256Of(last)).toBe(sha256Of(direct.lastState()));
  expect(reader.meta()).toMatchObject({ runId: 'r', setup, startStep: 0, totalSteps: 640, stepsPerDay: 16 });
  await reader.close();
});

it('saves on order within moments, and another goes on from there to the same end', async () => {
  const setup = smallSetup(1500);
  const told: WorkerMessage[] = [];
  let slices = 0;
  const first = new RunJob(jobOf(setup), {
    pause: () => {
      if (++slices === 3) first.orderSave();
      return Promise.resolve();
    },
  });
  const saved = await first.run();
  expect(saved.kind).toBe('saved');
  const { step, savedStep } = (saved as Extract<WorkerOutcome, { kind: 'saved' }>).progress;
  expect(savedStep).toBe(step);
  expect(step).toBeGreaterThan(0);
  expect(step).toBeLessThan(1500 * 16);
  const finished = (await new RunJob(jobOf(setup), { report: (message) => told.push(message) }).run()) as Finished;
  expect(told[0]).toMatchObject({ type: 'report', progress: { step, savedStep: step } });
  const direct = Integration.start(setup);
  direct.advance(direct.totalSteps);
  expect(finished.fingerprint).toEqual(direct.fingerprint());
});

it('tells a full disk apart, keeps what was committed, and finishes once there is room', async () => {
  const setup = smallSetup(400);
  // eslint-disable-next-line @typescript-eslint/unbound-method -- called with its own `this` below
  const commit = RunFileWriter.prototype.commit;
  let commits = 0;
  vi.spyOn(RunFileWriter.prototype, 'commit').mockImplementation(function (this: RunFileWriter) {
    if (++commits > 1)
      return Promise.reject(Object.assign(new Error('SQLITE_FULL: disk is full'), { code: 'SQLITE_FULL' }));
    return commit.call(this);
  });
  const outcome = await new RunJob(jobOf(setup, 0.01)).run();
  expect(outcome).toMatchObject({ kind: 'disk full', message: expect.stringMatching(/No space/) });
  vi.restoreAllMocks();
  expect((await readdir(join(varDir, 'runs'))).filter((name) => name.endsWith('.lock'))).toEqual([]);
  expect((await new RunJob(jobOf(setup)).run()).kind).toBe('finished');
});

it('calls the result lost when the run file is no database any more', async () => {
  const setup = smallSetup(10);
  await new RunJob(jobOf(setup)).run();
  const { file } = runPaths(varDir, 'r');
  await rm(`${file}-wal`, { force: true });
  await writeFile(file, 'this was a database once, and it is long enough to look at, but it is not one any more');
  const outcome = await new RunJob(jobOf(setup)).run();
  expect(outcome).toMatchObject({ kind: 'failed', failure: { cause: 'result lost' } });
});

it('lets errors through that are neither the run’s nor the disk’s', async () => {
  vi.spyOn(Integration.prototype, 'takeMoorings').mockImplementation(() => {
    throw new TypeError('a programme error');
  });
  await expect(new RunJob(jobOf(smallSetup(10))).run()).rejects.toThrow('a programme error');
});

it('knows a full disk by its code, wherever it is in the chain of causes', () => {
  const full = Object.assign(new Error('write'), { code: 'ENOSPC' });
  expect(isDiskFull(new Error('outer', { cause: full }))).toBe(true);
  expect(isDiskFull(Object.assign(new Error('x'), { code: 'EIO' }))).toBe(false);
  expect(isDiskFull('ENOSPC')).toBe(false);
});

it('measures speed over the last seconds alone', () => {
  const speed = new Speedometer(5000);
  expect(speed.stepsPerSecond()).toBeNull();
  speed.mark(0, 0);
  expect(speed.stepsPerSecond()).toBeNull();
  for (let at = 1000; at <= 10_000; at += 1000) speed.mark(at / 10, at);
  expect(speed.stepsPerSecond()).toBe(100);
  for (let at = 11_000; at <= 20_000; at += 1000) speed.mark(1000 + (at - 10_000) / 5, at);
  expect(speed.stepsPerSecond()).toBe(200);
});
