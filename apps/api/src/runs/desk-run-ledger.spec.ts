import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { corvaneSetup, type Preflight, type Setup } from '@halfdeep/ocean';
import { Experiment, openDesk, Person, Run, type DeskDatabase } from '@halfdeep/store';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { DeskRunLedger } from './desk-run-ledger';

const uuid = (n: number) => `00000000-0000-4000-8000-${String(n).padStart(12, '0')}`;
const [ANN, BEN, EXPERIMENT] = [uuid(1), uuid(2), uuid(3)];
const PROGRESS = {
  step: 0,
  totalSteps: 10,
  startStep: 0,
  day: 0,
  totalDays: 1,
  cellStepsPerSecond: null,
  secondsLeft: null,
  records: { frames: 0, sections: 0, moorings: 0, budget: 0 },
  savedStep: null,
  cautions: [],
};
const FINISHED = {
  fingerprint: {
    sha256: 'ab'.repeat(32),
    coreVersion: '1',
    shape: [1, 1, 1, 1, 1, 1] as [number, number, number, number, number, number],
  },
  stateSha256: 'cd'.repeat(32),
  lastStep: 10,
  progress: { ...PROGRESS, step: 10, day: 1 },
};

/** A setup that is told from others by the name of its water. */
function setupCalled(name: string): Setup {
  const setup = corvaneSetup();
  setup.basin.name = name;
  return setup;
}

describe('the run ledger on the desk database', () => {
  let folder: string;
  let desk: DeskDatabase;
  let ledger: DeskRunLedger;
  let made = 0;

  beforeEach(async () => {
    folder = await mkdtemp(join(tmpdir(), 'ledger-'));
    desk = await openDesk(join(folder, 'desk.sqlite'));
    ledger = new DeskRunLedger(desk, { cap: 2, paused: false, whenLowered: 'drain' });
    await desk.write(async (transaction) => {
      for (const [id, name] of [
        [ANN, 'ann'],
        [BEN, 'ben'],
      ])
        await Person.create(
          { id, name, email: `${name}@x.example`, state: 'invited', passwordHash: null, createdAt: new Date() },
          { transaction },
        );
      const at = new Date('2020-01-01T00:00:00Z');
      await Experiment.create(
        {
          id: EXPERIMENT,
          ownerId: ANN,
          question: 'Does it order?',
          notes: '',
          createdAt: at,
          movedAt: at,
          moved: 'made',
        },
        { transaction },
      );
    });
  });
  afterEach(async () => {
    await desk.close();
    await rm(folder, { recursive: true });
  });

  /** Writes a queued run at its fair place. */
  async function queue(label: string, ownerId = ANN): Promise<string> {
    const id = uuid(100 + made++);
    await desk.write(async (transaction) =>
      Run.create(
        {
          id,
          experimentId: EXPERIMENT,
          ownerId,
          label,
          setup: setupCalled(label),
          preflight: {} as unknown as Preflight,
          nx: 4,
          ny: 4,
          parentRunId: null,
          parentLabel: null,
          descent: 'control',
          changes: [],
          state: 'queued',
          queuedReason: null,
          queueOrder: await ledger.orderFor(ownerId, 'back', transaction),
          failure: null,
          deaths: 0,
          createdAt: new Date(),
          queuedAt: new Date(),
          startedAt: null,
          endedAt: null,
          progress: PROGRESS,
          fingerprint: null,
          stateSha256: null,
          lastStep: null,
          diskBytes: null,
          workerPid: null,
        },
        { transaction },
      ),
    );
    return id;
  }
  const label = (run: { setup: Setup } | null) => run && run.setup.basin.name;
  const waiting = async () => (await ledger.waiting()).map(label).join(' ');

  it('hands out runs in fair order and says when nothing waits', async () => {
    for (const text of ['a1', 'a2', 'a3']) await queue(text);
    await queue('b1', BEN);
    expect(await waiting()).toBe('a1 b1 a2 a3');
    const claimed = [await ledger.claimNext(), await ledger.claimNext(), await ledger.claimNext()].map(label);
    expect(claimed).toEqual(['a1', 'b1', 'a2']);
    expect((await ledger.running()).map(label)).toEqual(['a1', 'b1', 'a2']);
    await ledger.claimNext();
    expect(await ledger.claimNext()).toBeNull();
  });

  it('never hands one run out twice, however many ask at once', async () => {
    for (let n = 0; n < 6; n++) await queue(`r${n}`);
    const claimed = await Promise.all(Array.from({ length: 9 }, () => ledger.claimNext()));
    const got = claimed.map(label).filter((text) => text !== null);
    expect([...got].sort()).toEqual(['r0', 'r1', 'r2', 'r3', 'r4', 'r5']);
  });

  it('keeps an admin’s order, and places later runs fairly in it', async () => {
    const ids = [];
    for (const text of ['a1', 'a2', 'a3']) ids.push(await queue(text));
    await ledger.reorder([ids[2], ids[1], uuid(9)]);
    expect(await waiting()).toBe('a3 a2 a1');
    await queue('b1', BEN);
    expect(await waiting()).toBe('a3 b1 a2 a1');
  });

  it('puts a run that the machine gave back first, and one that a person resumed at its fair place', async () => {
    for (const text of ['a1', 'a2', 'a3']) await queue(text);
    const first = (await ledger.claimNext())!;
    expect(await ledger.markQueued(first.runId, 'worker died', 'front')).toBe(true);
    expect(await waiting()).toBe('a1 a2 a3');
    expect((await ledger.find(first.runId))?.queuedReason).toBe('worker died');
    await ledger.claimNext();
    await ledger.countDeath(first.runId);
    expect(await ledger.markStopped(first.runId)).toBe(true);
    expect(await ledger.markQueued(first.runId, 'resumed', 'back')).toBe(true);
    expect(await waiting()).toBe('a2 a3 a1');
    expect((await ledger.find(first.runId))?.deaths).toBe(0);
  });

  it('numbers the list anew where two neighbours leave no room between them', async () => {
    const ids = [await queue('a1'), await queue('a2'), await queue('a3')];
    const order = (id: string, queueOrder: number) =>
      desk.write((transaction) => Run.update({ queueOrder }, { where: { id }, transaction }));
    await order(ids[1], 1 + Number.EPSILON);
    await order(ids[2], 1 + 2 * Number.EPSILON);
    await queue('b1', BEN);
    await queue('b2', BEN);
    expect(await waiting()).toBe('a1 b1 a2 b2 a3');
  });

  it('changes nothing from a state that does not allow it', async () => {
    const id = await queue('a1');
    expect(await ledger.markFinished(id, FINISHED)).toBe(false);
    expect(await ledger.markQueued(id, 'resumed', 'back')).toBe(false);
    await ledger.claimNext();
    expect(await ledger.markFinished(id, FINISHED)).toBe(true);
    expect(await ledger.markStopped(id)).toBe(false);
    const failure = {
      cause: 'internal',
      message: 'x',
      step: null,
      day: null,
      place: null,
      lastGoodStep: null,
    } as const;
    expect(await ledger.markFailed(id, failure)).toBe(false);
    expect(await ledger.markQueued(uuid(9), null, 'front')).toBe(false);
    const row = (await Run.findByPk(id))!;
    expect([row.state, row.stateSha256, row.progress.step]).toEqual(['finished', FINISHED.stateSha256, 10]);
    expect(row.endedAt).not.toBeNull();
  });

  it('counts deaths until a checkpoint lands, and clears a failure when the run goes back to the queue', async () => {
    const id = await queue('a1');
    await ledger.claimNext();
    await ledger.recordWorker(id, 4711);
    expect(await ledger.countDeath(id)).toBe(1);
    expect(await ledger.countDeath(id)).toBe(2);
    await ledger.clearDeaths(id);
    expect(await ledger.countDeath(id)).toBe(1);
    expect((await ledger.find(id))?.workerPid).toBe(4711);
    const failure = { cause: 'worker died', message: 'x', step: 1, day: 1, place: null, lastGoodStep: 0 } as const;
    expect(await ledger.markFailed(id, failure)).toBe(true);
    expect((await Run.findByPk(id))!.failure).toEqual(failure);
    expect(await ledger.markQueued(id, 'resumed', 'back')).toBe(true);
    expect((await Run.findByPk(id))!.failure).toBeNull();
  });

  it('records progress and disk in any state, and keeps the disk figure when none is told', async () => {
    const id = await queue('a1');
    await ledger.recordProgress(id, { ...PROGRESS, step: 4 }, 9_000_000_000);
    await ledger.recordProgress(id, { ...PROGRESS, step: 5 }, null);
    const row = (await Run.findByPk(id))!;
    expect([row.progress.step, row.diskBytes]).toEqual([5, 9_000_000_000]);
  });

  it('keeps the settings of the queue', async () => {
    expect(await ledger.settings()).toEqual({ cap: 2, paused: false, whenLowered: 'drain' });
    await ledger.saveSettings({ cap: 1, paused: true, whenLowered: 'checkpoint' });
    expect(await ledger.settings()).toEqual({ cap: 1, paused: true, whenLowered: 'checkpoint' });
  });

  it('says in the experiment what moved last, and when', async () => {
    const moved = async () => (await Experiment.findByPk(EXPERIMENT))!;
    const id = await queue('Strong');
    expect((await moved()).moved).toBe('Strong queued');
    expect(Math.abs(Date.now() - (await moved()).movedAt.getTime())).toBeLessThan(5000);
    await ledger.claimNext();
    expect((await moved()).moved).toBe('Strong started');
    await ledger.markFinished(id, FINISHED);
    expect((await moved()).moved).toBe('Strong finished');
    await desk.write((transaction) => Run.destroy({ where: { id }, transaction }));
    expect((await moved()).moved).toBe('Strong deleted');
  });

  it('holds the setup of a run fast', async () => {
    const id = await queue('a1');
    const change = (values: Partial<Run>) =>
      desk.write((transaction) => Run.update(values, { where: { id }, transaction }));
    await expect(change({ setup: setupCalled('Other') })).rejects.toMatchObject({
      parent: { message: expect.stringMatching(/never changes once it is queued/) as unknown },
    });
    await expect(change({ nx: 5 })).rejects.toThrow();
    await expect(change({ state: 'finished', queueOrder: null })).rejects.toThrow();
    await change({ label: 'another' });
  });
});
