import { rm, writeFile } from 'node:fs/promises';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import { adoptStartState, runPaths } from '@halfdeep/store';
import { Bench, bundle, recordsHash, removeBundle, type Result, resultOf, undisturbed, until } from './harness';
import { tinySetup } from './tiny-setup';

const setup = tinySetup(1460);
let calm: Result;
let worker: string;
let bench: Bench | null = null;
beforeAll(async () => {
  worker = await bundle('slow-worker');
  calm = await undisturbed(worker, setup);
});
afterEach(async () => {
  await bench?.close();
  bench = null;
});
afterAll(() => removeBundle(worker));

const saved = async (runId: string) => (await bench!.row(runId)).progress.savedStep ?? 0;
const resume = async (runId: string) => {
  expect(await bench!.ledger.markQueued(runId, 'resumed', 'back')).toBe(true);
  await bench!.queue.enqueue(runId);
};

describe('a run that is interrupted on purpose', () => {
  it('stops at once, resumes, and comes to the same as one never stopped', async () => {
    bench = await Bench.open(worker, { checkpointSeconds: 600 }, 250);
    const runId = await bench.add(setup);
    for (let stops = 0; stops < 3; stops++) {
      const before = await saved(runId);
      await until(async () => (await bench!.row(runId)).progress.step > before);
      expect(await bench.queue.stop(runId)).toBe(true);
      expect(await bench.state(runId)).toBe('stopped');
      await bench.queue.released(runId);
      expect(await saved(runId)).toBeGreaterThan(before);
      expect((await bench.row(runId)).progress.step).toBe(await saved(runId));
      await resume(runId);
    }
    expect(await resultOf(bench, runId)).toEqual(calm);
    for (const { saved, began } of bench.resumptions(runId)) expect(began).toBe(saved);
  });

  it('is checkpointed and requeued when the cap is lowered, and comes to the same later', async () => {
    bench = await Bench.open(worker, { checkpointSeconds: 600 }, 250);
    await bench.queue.setCap(2, 'drain');
    const first = await bench.add(setup);
    await until(() => bench!.queue.workers().length === 1);
    const second = await bench.add(setup);
    await until(async () => (await bench!.row(second)).progress.step > 0);
    await bench.queue.setCap(1, 'checkpoint');
    expect((await bench.row(second)).queuedReason).toBe('cap lowered');
    expect(await bench.state(first)).toBe('running');
    expect(await resultOf(bench, first)).toEqual(calm);
    expect(await resultOf(bench, second)).toEqual(calm);
    expect(bench.states(second)).toEqual(['queued', 'running', 'queued: cap lowered', 'running', 'finished']);
    const [{ began }] = bench.resumptions(second);
    expect(began).toBeGreaterThan(0);
  });

  it('extended by as many days, equals one of twice the length to the last bit, records too', async () => {
    bench = await Bench.open(worker);
    const half = await bench.add(tinySetup(120));
    await bench.finished(half);
    const { stateSha256, lastStep, fingerprint } = await bench.row(half);
    const extended = tinySetup(120, (it) => {
      it.start = {
        kind: 'state',
        runId: half,
        fingerprint: fingerprint!.sha256,
        stateSha256: stateSha256!,
        startStep: lastStep!,
        stepsPerDay: it.numerics.stepsPerDay,
      };
    });
    await bench.queue.setPaused(true);
    const extension = await bench.add(extended);
    await adoptStartState(runPaths(bench.varDir, half), runPaths(bench.varDir, extension), stateSha256!);
    // The extension stands on its own copy: the parent's may go.
    await rm(runPaths(bench.varDir, half).last);
    await bench.queue.setPaused(false);
    const whole = await bench.add(tinySetup(240));
    await bench.finished(extension);
    await bench.finished(whole);
    const [a, b] = [await bench.row(extension), await bench.row(whole)];
    expect(a.fingerprint).toEqual(b.fingerprint);
    expect([a.lastStep, a.stateSha256]).toEqual([b.lastStep, b.stateSha256]);
    expect(a.progress).toMatchObject({ startStep: 120 * 16, totalSteps: 240 * 16, totalDays: 240 });
    // Its first frame is the state it starts from, the whole run's frame of day 120.
    expect(await recordsHash(bench.varDir, extension, 120)).toBe(await recordsHash(bench.varDir, whole, 120));
    expect(await recordsHash(bench.varDir, extension, 120)).not.toBe(await recordsHash(bench.varDir, whole, 121));
  });

  it('fails with a plain reason when the state it starts from is another or gone', async () => {
    bench = await Bench.open(worker);
    const start = {
      kind: 'state' as const,
      runId: 'gone',
      fingerprint: 'f'.repeat(64),
      stateSha256: 'a'.repeat(64),
      startStep: 1920,
      stepsPerDay: 16,
    };
    const runId = await bench.add(tinySetup(10, (it) => (it.start = start)));
    await until(async () => (await bench!.state(runId)) === 'failed');
    expect((await bench.row(runId)).failure).toMatchObject({
      cause: 'result lost',
      message: expect.stringMatching(/start state.*missing/),
    });
    await writeFile(runPaths(bench.varDir, runId).start, 'another state');
    await resume(runId);
    await until(() => bench!.states(runId).filter((state) => state === 'failed').length === 2);
    expect((await bench.row(runId)).failure?.message).toMatch(/start state.*damaged/);
  });

  it('that is not finite fails with the first bad step and cell, and keeps what was good', async () => {
    bench = await Bench.open(worker);
    // Ten times the stable step: preflight refuses it, so it comes in by the ledger alone.
    const unstable = tinySetup(200, (it) => (it.numerics.stepsPerDay = 4));
    unstable.layer.reducedGravityMS2 = 3;
    const runId = await bench.add(unstable);
    await until(async () => (await bench!.state(runId)) === 'failed');
    const { failure, progress } = await bench.row(runId);
    expect(failure).toMatchObject({
      cause: 'non-finite',
      place: expect.stringMatching(/^[ηuv] at .*° [EW], .*° [NS]$/),
    });
    expect(failure!.lastGoodStep).toBe(failure!.step! - 1);
    expect(progress.records.moorings).toBe(failure!.lastGoodStep);
    expect(failure!.message).toMatch(/time step/);
  });
});
