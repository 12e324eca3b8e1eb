import { type Experiment, type Problem, type Run, type RunSummary } from '@halfdeep/contracts';
import { Integration } from '@halfdeep/ocean';
import { Run as RunRow } from '@halfdeep/store';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { decodeSlice } from '../../apps/api/src/slices/encode';
import {
  bytesOf,
  endlessSetup,
  newExperiment,
  newRun,
  reach,
  runFiles,
  slowly,
  smallSetup,
  startRunApi,
  until,
  type Hand,
  type RunApi,
} from './run-harness';

describe('orders to a run', () => {
  let api: RunApi;
  let hand: Hand;
  let experiment: Experiment;

  beforeAll(async () => {
    api = await startRunApi();
    hand = await api.person('mara', 'modeller');
    experiment = await newExperiment(hand);
  });
  afterAll(() => api.close());

  const order = async (runId: string, name: string, body?: object) => {
    const answer = await hand.post(`/api/runs/${runId}/${name}`, body);
    expect([202, JSON.stringify(answer.body)]).toEqual([answer.status, expect.anything()]);
    return answer.body as RunSummary;
  };
  const step = async (runId: string) => ((await hand.get(`/api/runs/${runId}`)).body as Run).progress.step;

  it('stops at once, saves behind the answer, resumes, and ends as if undisturbed', async () => {
    const days = 6000;
    const setup = smallSetup(days, (s) => Object.assign(s.output, { frameIntervalDays: 20, sectionIntervalDays: 20 }));
    const { id } = await slowly(async () => {
      const queued = await newRun(hand, experiment.id, setup);
      await until(
        () => step(queued.id),
        (done) => done > 0,
      );
      return queued;
    });
    const stopped = await order(id, 'stop');
    expect(stopped).toMatchObject({ state: 'stopped', can: { stop: false, resume: true, delete: true } });
    expect(stopped.progress.cellStepsPerSecond).toBeNull();
    const saved = await until(
      async () => (await hand.get(`/api/runs/${id}`)).body as Run,
      (run) => run.progress.savedStep !== null,
    );
    expect(saved.progress.savedStep).toBeLessThan(days * 16);
    const again = await hand.post(`/api/runs/${id}/stop`).expect(409);
    expect((again.body as Problem).detail).toMatch(/the run is stopped; it must be queued or running/);

    const resumed = await order(id, 'resume');
    expect(['queued', 'running']).toContain(resumed.state);
    const finished = await reach(hand, id, 'finished');
    const direct = Integration.start(setup);
    direct.advance(direct.totalSteps);
    expect(finished.fingerprint).toEqual(direct.fingerprint());
    expect(finished.endedAt).not.toBeNull();
  });

  it('stops a waiting run, which then leaves the queue', async () => {
    await api.services.runs.queue.setPaused(true);
    const { id } = await newRun(hand, experiment.id, smallSetup(3));
    expect(((await hand.get(`/api/runs/${id}`)).body as Run).queuePosition).toBe(1);
    expect(await order(id, 'stop')).toMatchObject({ state: 'stopped', queuePosition: null });
    await api.services.runs.queue.setPaused(false);
    await order(id, 'resume');
    await reach(hand, id, 'finished');
  });

  it('extends into a run that equals one long run to the last bit, frames and series too', async () => {
    const short = await newRun(hand, experiment.id, smallSetup(12), 'Short');
    await reach(hand, short.id, 'finished');
    const extended = await order(short.id, 'extend', { label: 'Longer', days: 18 });
    expect(extended).toMatchObject({ descent: 'extension', parentRunId: short.id, parentLabel: 'Short' });
    const end = await reach(hand, extended.id, 'finished');
    expect(end.progress).toMatchObject({ startStep: 192, totalSteps: 480, totalDays: 30 });
    const long = await newRun(hand, experiment.id, smallSetup(30), 'Long');
    const whole = await reach(hand, long.id, 'finished');
    expect(end.fingerprint).toEqual(whole.fingerprint);
    const slice = async (id: string, path: string) => decodeSlice(await bytesOf(hand.get(`/api/runs/${id}/${path}`)));
    for (const path of [
      'hovmoller?variable=v&latitude=0&from=12',
      'series/sections?from=13',
      'series/moorings?from=12.25',
    ]) {
      const [part, all] = [await slice(end.id, path), await slice(whole.id, path)];
      expect(part.head.axes).toEqual(all.head.axes);
      expect(Buffer.from(part.data.buffer).equals(Buffer.from(all.data.buffer))).toBe(true);
    }
  });

  it('refuses to extend by less than an output interval, and what has not finished', async () => {
    const run = await newRun(hand, experiment.id, smallSetup(3));
    await reach(hand, run.id, 'finished');
    const answer = await hand.post(`/api/runs/${run.id}/extend`, { label: 'x', days: 0.5 }).expect(422);
    expect((answer.body as Problem).errors?.[0].pointer).toBe('/days');
    const endless = await newRun(hand, experiment.id, endlessSetup());
    await hand.post(`/api/runs/${endless.id}/extend`, { label: 'x', days: 5 }).expect(409);
    await order(endless.id, 'stop');
    await hand.post(`/api/runs/${endless.id}/extend`, { label: 'x', days: 5 }).expect(409);
  });

  it('refuses to extend or repeat what the quota has no room for, and keeps nothing', async () => {
    const run = await reach(hand, (await newRun(hand, experiment.id, smallSetup(3))).id, 'finished');
    const setDisk = (diskBytes: number | null) =>
      api.services.desk.write((transaction) => RunRow.update({ diskBytes }, { where: { id: run.id }, transaction }));
    await setDisk(20e9 - 1000);
    const rows = await RunRow.count();
    const answer = await hand.post(`/api/runs/${run.id}/extend`, { label: 'x', days: 30 }).expect(422);
    expect((answer.body as Problem).errors?.map((error) => error.pointer)).toEqual(['/days']);
    expect((answer.body as Problem).detail).toMatch(/Preflight refuses this setup/);
    await hand.post(`/api/runs/${run.id}/repeat`).expect(422);
    expect(await RunRow.count()).toBe(rows);
    await setDisk(run.diskBytes);
  });

  it('keeps an extension repeatable when its parent is deleted', async () => {
    const parent = await newRun(hand, experiment.id, smallSetup(3), 'Parent');
    await reach(hand, parent.id, 'finished');
    const child = await order(parent.id, 'extend', { label: 'Child', days: 3 });
    const before = await reach(hand, child.id, 'finished');
    await hand.delete(`/api/runs/${parent.id}`).expect(204);
    const after = (await hand.get(`/api/runs/${child.id}`).expect(200)).body as Run;
    expect(after).toMatchObject({
      parentRunId: null,
      parentLabel: 'Parent',
      descent: 'extension',
      changes: before.changes,
    });
    expect(after.setup).toEqual(before.setup);
    const repeat = await order(child.id, 'repeat');
    expect((await reach(hand, repeat.id, 'finished')).fingerprint).toEqual(before.fingerprint);
  });

  it('repeats a run to the same fingerprint', async () => {
    const first = await reach(hand, (await newRun(hand, experiment.id, smallSetup(6), 'Once')).id, 'finished');
    const second = await order(first.id, 'repeat');
    expect(second).toMatchObject({ label: 'Once, repeated', parentRunId: first.id, changes: [] });
    expect((await reach(hand, second.id, 'finished')).fingerprint).toEqual(first.fingerprint);
  });

  it('captions a sensitivity run by what it changes', async () => {
    const control = await newRun(hand, experiment.id, smallSetup(3));
    const strong = smallSetup(3, (s) => (s.wind.seasonalStrength = 1.2));
    const answer = await hand
      .post(`/api/experiments/${experiment.id}/runs`, { label: 'Strong', setup: strong, parentRunId: control.id })
      .expect(202);
    expect(answer.body).toMatchObject({ descent: 'sensitivity', parentLabel: 'Control' });
    expect((answer.body as Run).changes).toMatchObject([
      { pointer: '/wind/seasonalStrength', from: '1.00', to: '1.20' },
    ]);
    await reach(hand, (answer.body as Run).id, 'finished');
  });

  it('deletes a run with every file that it left, and only that', async () => {
    const kept = await reach(hand, (await newRun(hand, experiment.id, smallSetup(3))).id, 'finished');
    const run = await newRun(hand, experiment.id, endlessSetup());
    await until(
      () => step(run.id),
      (done) => done > 0,
    );
    await bytesOf(hand.get(`/api/runs/${run.id}/frames/latest?variable=eta`)); // a reader is open now
    await hand.delete(`/api/runs/${run.id}`).expect(409); // still running
    await order(run.id, 'stop');
    await hand.delete(`/api/runs/${run.id}`).expect(204);
    await hand.get(`/api/runs/${run.id}`).expect(404);
    const files = await runFiles(api);
    expect(files.filter((name) => name.startsWith(run.id))).toEqual([]);
    expect(files.some((name) => name.startsWith(kept.id))).toBe(true);
    await bytesOf(hand.get(`/api/runs/${kept.id}/frames/latest?variable=eta`));
    const told = ((await hand.get(`/api/experiments/${experiment.id}`)).body as Experiment).moved;
    expect(told).toBe('Control deleted');
  });

  it('queues once however often a nervous finger sends the same request', async () => {
    const path = `/api/experiments/${experiment.id}/runs`;
    const body = { label: 'Once only', setup: smallSetup(3) };
    const send = () => hand.post(path, body).set('idempotency-key', 'finger-1');
    const answers = await Promise.all([send(), send(), send()]);
    answers.push(await send());
    expect(answers.map((answer) => answer.status)).toEqual([202, 202, 202, 202]);
    expect(new Set(answers.map((answer) => (answer.body as Run).id)).size).toBe(1);
    expect(await RunRow.count({ where: { label: 'Once only' } })).toBe(1);
    await hand
      .post(path, { ...body, label: 'Another' })
      .set('idempotency-key', 'finger-1')
      .expect(422);
    await reach(hand, (answers[0].body as Run).id, 'finished');
  });

  it('resumes nothing whose setup made it fail', async () => {
    const run = await newRun(hand, experiment.id, smallSetup(3));
    await reach(hand, run.id, 'finished');
    const failure = {
      cause: 'non-finite',
      message: 'h left its bounds.',
      step: 3,
      day: 1,
      place: null,
      lastGoodStep: 0,
    };
    await api.services.desk.write((transaction) =>
      RunRow.update({ state: 'failed', failure: failure as never }, { where: { id: run.id }, transaction }),
    );
    const shown = (await hand.get(`/api/runs/${run.id}`)).body as Run;
    expect([shown.can.resume, shown.failure]).toEqual([false, failure]);
    const answer = await hand.post(`/api/runs/${run.id}/resume`).expect(409);
    expect((answer.body as Problem).detail).toMatch(/would fail again/);
  });
});
