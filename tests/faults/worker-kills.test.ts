import { readdir, writeFile } from 'node:fs/promises';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import { runPaths } from '@halfdeep/store';
import { Bench, bundle, removeBundle, type Result, resultOf, undisturbed, until } from './harness';
import { tinySetup } from './tiny-setup';

const setup = tinySetup(1460);
let calm: Result;
let slow: string;
let deadly: string;
let bench: Bench | null = null;
beforeAll(async () => {
  [slow, deadly] = await Promise.all([bundle('slow-worker'), bundle('deadly-worker')]);
  calm = await undisturbed(slow, setup);
});
afterEach(async () => {
  await bench?.close();
  bench = null;
});
afterAll(async () => {
  await removeBundle(slow);
  await removeBundle(deadly);
});

/** Pseudo-random numbers in [0, 1) that are the same in every run of the test: Park & Miller (1988). */
function randomNumbers(seed: number): () => number {
  let state = seed;
  return () => (state = (state * 48271) % 2147483647) / 2147483647;
}

describe('killing the worker', () => {
  it('at any moment changes nothing in what the run comes to', async () => {
    bench = await Bench.open(slow, {}, 200);
    const random = randomNumbers(20);
    const runId = await bench.add(setup);
    let kills = 0;
    while (kills < 8) {
      await until(() => bench!.queue.workers().length === 1 || bench!.states(runId).includes('finished'));
      if (bench.states(runId).includes('finished')) break;
      const { pid } = bench.queue.workers()[0];
      const sooner = (await bench.row(runId)).deaths < 2;
      await new Promise((resolve) => setTimeout(resolve, 1500 * random()));
      // A third death without a new checkpoint would fail the run, rightly: that is another test.
      if (!sooner)
        await until(async () => (await bench!.row(runId)).deaths === 0 || (await bench!.state(runId)) !== 'running');
      if (bench.queue.workers()[0]?.pid !== pid) continue;
      process.kill(pid, 'SIGKILL');
      kills++;
      await until(() => !bench!.queue.workers().some((worker) => worker.pid === pid));
    }
    // A quick machine may be done before the eighth.
    expect(kills).toBeGreaterThanOrEqual(4);
    const disturbed = await resultOf(bench, runId);
    expect(bench.states(runId).filter((state) => state === 'queued: worker died')).toHaveLength(kills);
    // Each time it went on where it had been saved, or further: not from the start.
    const resumptions = bench.resumptions(runId);
    for (const { saved, began } of resumptions) expect(began).toBeGreaterThanOrEqual(saved);
    expect(resumptions.filter(({ began }) => began > 0).length).toBeGreaterThanOrEqual(2);
    expect(disturbed).toEqual(calm);
  });

  it('by the run itself, again and again, fails the run with the reason', async () => {
    bench = await Bench.open(deadly);
    const runId = await bench.add(setup);
    await until(async () => (await bench!.state(runId)) === 'failed');
    const { failure, endedAt } = await bench.row(runId);
    expect(failure).toMatchObject({ cause: 'worker died', lastGoodStep: null });
    expect(failure?.message).toMatch(/died 3 times without a new checkpoint.*SIGKILL/);
    expect(endedAt).not.toBeNull();
    expect(bench.states(runId).filter((state) => state === 'running')).toHaveLength(3);
  });

  it('in the middle of a checkpoint leaves a half-written file that is ignored and swept', async () => {
    bench = await Bench.open(slow, {}, 60);
    const runId = await bench.add(setup);
    const paths = runPaths(bench.varDir, runId);
    await until(async () => ((await bench!.row(runId)).progress.savedStep ?? 0) > 0);
    process.kill(bench.queue.workers()[0].pid, 'SIGKILL');
    // What a kill between opening and renaming leaves, newer than every recorded checkpoint.
    await writeFile(`${paths.checkpoint(20_000)}.tmp`, 'half a checkpoint');
    await until(() => bench!.states(runId).includes('queued: worker died'));
    const disturbed = await resultOf(bench, runId);
    expect((await readdir(paths.folder)).filter((name) => name.endsWith('.tmp'))).toEqual([]);
    expect(disturbed).toEqual(calm);
  });

  it('and damaging its newest checkpoint falls back on the one before', async () => {
    bench = await Bench.open(slow, {}, 60);
    const runId = await bench.add(setup);
    const { folder } = runPaths(bench.varDir, runId);
    const checkpoints = async () =>
      (await readdir(folder).catch(() => []))
        .flatMap((name) => (name.startsWith(runId) && name.endsWith('.checkpoint') ? [Number(name.split('.')[1])] : []))
        .sort((a, b) => b - a);
    await until(async () => (await checkpoints()).length === 2);
    await bench.queue.stop(runId);
    await bench.queue.released(runId);
    const [newest, before] = await checkpoints();
    await writeFile(runPaths(bench.varDir, runId).checkpoint(newest), 'not what it was');
    await bench.ledger.markQueued(runId, 'resumed', 'back');
    await bench.queue.enqueue(runId);
    const disturbed = await resultOf(bench, runId);
    expect(bench.resumptions(runId)).toEqual([{ saved: newest, began: before }]);
    expect(disturbed).toEqual(calm);
  });
});
