import { type AdminQueue, type Experiment, type Problem, type Run, type WorkerInfo } from '@halfdeep/contracts';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
  endlessSetup,
  newExperiment,
  newRun,
  reach,
  smallSetup,
  startRunApi,
  until,
  type Hand,
  type RunApi,
} from './run-harness';

describe('the queue in an admin’s hands', () => {
  let api: RunApi;
  let admin: Hand;
  let mara: Hand;
  let noor: Hand;
  let ofMara: Experiment;
  let ofNoor: Experiment;

  beforeAll(async () => {
    api = await startRunApi();
    admin = await api.person('ada', 'admin');
    mara = await api.person('mara', 'modeller');
    noor = await api.person('noor', 'modeller');
    ofMara = await newExperiment(mara);
    ofNoor = await newExperiment(noor);
  });
  afterAll(() => api.close());

  const read = async () => (await admin.get('/api/admin/queue').expect(200)).body as AdminQueue;
  const change = async (patch: object) => (await admin.patch('/api/admin/queue', patch).expect(200)).body as AdminQueue;
  const labels = (runs: { label: string }[]) => runs.map((run) => run.label).join(' ');
  const stop = (hand: Hand, run: Run) => hand.post(`/api/runs/${run.id}/stop`).expect(202);

  it('pauses intake at once and takes it up again', async () => {
    expect(await change({ paused: true })).toMatchObject({ paused: true, running: [], waiting: [] });
    const run = await newRun(mara, ofMara.id, smallSetup(3));
    expect((await read()).waiting.map((waiting) => [waiting.id, waiting.queuePosition])).toEqual([[run.id, 1]]);
    expect(((await mara.get(`/api/runs/${run.id}`)).body as Run).startedAt).toBeNull();
    expect((await change({ paused: false })).paused).toBe(false);
    await reach(mara, run.id, 'finished');
  });

  it('computes as many at once as the cap says, and puts the youngest back when it is lowered', async () => {
    await change({ cap: 2 });
    const first = await newRun(mara, ofMara.id, endlessSetup(), 'First');
    await reach(mara, first.id, 'running');
    const second = await newRun(noor, ofNoor.id, endlessSetup(), 'Second');
    const third = await newRun(noor, ofNoor.id, endlessSetup(), 'Third');
    await reach(noor, second.id, 'running');
    expect(labels((await read()).waiting)).toBe('Third');

    const workers = await until(
      async () => (await admin.get('/api/admin/workers').expect(200)).body as WorkerInfo[],
      (list) => list.length === 2 && list.every((worker) => worker.residentBytes !== null),
    );
    expect(labels(workers.map((worker) => worker.run))).toBe('First Second');
    expect(new Set(workers.map((worker) => worker.pid)).size).toBe(2);
    for (const worker of workers) expect(() => process.kill(worker.pid, 0)).not.toThrow();

    const lowered = await change({ cap: 1, whenLowered: 'checkpoint' });
    expect([lowered.cap, labels(lowered.running), labels(lowered.waiting)]).toEqual([1, 'First', 'Second Third']);
    expect(lowered.waiting[0].queuedReason).toBe('cap lowered');
    const saved = await until(
      async () => (await noor.get(`/api/runs/${second.id}`)).body as Run,
      (run) => run.progress.savedStep !== null,
    );
    await change({ cap: 2 });
    const again = await reach(noor, second.id, 'running');
    expect(again.queuedReason).toBeNull();
    await until(
      async () => ((await noor.get(`/api/runs/${second.id}`)).body as Run).progress.step,
      (step) => step > saved.progress.savedStep!,
    );

    // Lowered to drain: what runs goes on.
    const drained = await change({ cap: 1, whenLowered: 'drain' });
    expect([drained.cap, labels(drained.running)]).toEqual([1, 'First Second']);
    await stop(mara, first);
    await stop(noor, third);
    await stop(noor, second);
    await until(read, (queue) => queue.running.length === 0);
  });

  it('waits fairly between owners, and in the order that an admin wants', async () => {
    await change({ paused: true, cap: 1 });
    const runs = new Map<string, Run>();
    for (const label of ['M1', 'M2', 'M3']) runs.set(label, await newRun(mara, ofMara.id, smallSetup(3), label));
    runs.set('N1', await newRun(noor, ofNoor.id, smallSetup(3), 'N1'));
    expect(labels((await read()).waiting)).toBe('M1 N1 M2 M3');
    const moved = await change({ order: [runs.get('M3')!.id, runs.get('M1')!.id] });
    expect(labels(moved.waiting)).toBe('M3 M1 N1 M2');
    expect(moved.waiting.map((run) => run.queuePosition)).toEqual([1, 2, 3, 4]);
    await change({ paused: false });
    const started: [string, string][] = [];
    for (const [label, { id }] of runs) started.push([(await reach(mara, id, 'finished')).startedAt!, label]);
    expect(started.sort().map(([, label]) => label)).toEqual(['M3', 'M1', 'N1', 'M2']);
    await change({ cap: 2 });
  });

  it('refuses a cap that this machine does not take', async () => {
    const { maxCap } = await read();
    const high = await admin.patch('/api/admin/queue', { cap: maxCap + 1 }).expect(422);
    expect((high.body as Problem).errors).toEqual([
      { pointer: '/cap', detail: `At most ${maxCap} runs can compute at once here; ${maxCap + 1} arrived.` },
    ]);
    await admin.patch('/api/admin/queue', { cap: 0 }).expect(422);
    await admin.patch('/api/admin/queue', { cap: 1.5 }).expect(422);
    await admin.patch('/api/admin/queue', { speed: 9 }).expect(422);
    expect((await read()).cap).toBe(2);
  });

  it('leaves a trail of what was changed', async () => {
    const trail = (await admin.get('/api/admin/audit?q=changed the queue').expect(200)).body as {
      items: { detail: string; actor: { name: string } }[];
    };
    expect(trail.items.map((entry) => entry.actor.name)).toContain('ada');
    const details = trail.items.map((entry) => entry.detail).join('\n');
    expect(details).toMatch(/cap 2 → 1, running work beyond it: checkpoint/);
    expect(details).toMatch(/intake paused/);
    expect(details).toMatch(/order: 2 runs first/);
  });
});
