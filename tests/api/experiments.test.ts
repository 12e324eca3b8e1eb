import {
  type Desk,
  type Experiment,
  type ExperimentSummary,
  type Page,
  type Preset,
  type Problem,
} from '@halfdeep/contracts';
import { type RunSummary } from '@halfdeep/contracts';
import { setupSchema } from '@halfdeep/contracts';
import { Visit } from '@halfdeep/store';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { newExperiment, newRun, reach, smallSetup, startRunApi, type Hand, type RunApi } from './run-harness';

describe('experiments, runs and the desk as lists', () => {
  let api: RunApi;
  let mara: Hand;
  let noor: Hand;

  beforeAll(async () => {
    api = await startRunApi();
    mara = await api.person('Mara', 'modeller');
    noor = await api.person('Noor', 'modeller');
    for (let n = 1; n <= 12; n++) await newExperiment(mara, `Question number ${String(n).padStart(2, '0')} of Mara?`);
    for (const text of ['Why 100 % of it?', 'Why 100 cm of it?', 'WHY IS IT SO?', 'Why under_score?'])
      await newExperiment(noor, text);
  });
  afterAll(() => api.close());

  const list = async (query: string, hand = mara) =>
    (await hand.get(`/api/experiments?${query}`).expect(200)).body as Page<ExperimentSummary>;
  const questions = async (query: string) => (await list(query)).items.map((experiment) => experiment.question);

  it('pages through everything without gap or repeat', async () => {
    const pages = await Promise.all([1, 2, 3, 4].map((page) => list(`page=${page}&pageSize=5`)));
    expect(pages.map((page) => page.items.length)).toEqual([5, 5, 5, 1]);
    expect(pages.map((page) => page.total)).toEqual([16, 16, 16, 16]);
    expect(new Set(pages.flatMap((page) => page.items.map((item) => item.id))).size).toBe(16);
    expect((await list('page=9')).items).toEqual([]);
    await mara.get('/api/experiments?page=0').expect(400);
    await mara.get('/api/experiments?pageSize=1000').expect(400);
  });

  it('shows what moved last first, and sorts as asked', async () => {
    const moved = (await list('pageSize=100')).items.map((item) => item.movedAt);
    expect(moved).toEqual([...moved].sort().reverse());
    const named = await questions('pageSize=100&sort=question');
    expect(named).toEqual([...named].sort());
    expect(await questions('pageSize=100&sort=-question')).toEqual([...named].reverse());
    const owners = (await list('pageSize=100&sort=owner')).items.map((item) => item.owner.name);
    expect(owners).toEqual([...owners].sort());
    const answer = await mara.get('/api/experiments?sort=salt').expect(400);
    expect((answer.body as Problem).detail).toMatch(/sorts by moved, created, question, owner/);
  });

  it('searches question, notes and owner, whatever the case, and no letter is special', async () => {
    expect(await questions('q=why is')).toEqual(['WHY IS IT SO?']);
    expect(await questions('q=100 %25')).toEqual(['Why 100 % of it?']);
    expect(await questions('q=under_')).toEqual(['Why under_score?']);
    expect((await list('q=noor')).total).toBe(4);
    expect((await list(`q=${encodeURIComponent("'; DROP TABLE runs; --")}`)).total).toBe(0);
    expect((await list('owner=me')).total).toBe(12);
    expect((await list('owner=me', noor)).total).toBe(4);
  });

  it('keeps question and notes within their limits, and says what moved', async () => {
    const experiment = await newExperiment(mara, '  Does it keep its notes?  ');
    expect(experiment).toMatchObject({
      question: 'Does it keep its notes?',
      notes: '',
      moved: 'Question asked',
      physics: null,
    });
    const patched = await mara.patch(`/api/experiments/${experiment.id}`, { notes: 'It does.' }).expect(200);
    expect(patched.body).toMatchObject({
      notes: 'It does.',
      moved: 'Notes changed',
      question: 'Does it keep its notes?',
    });
    expect(await questions('q=it does.')).toEqual(['Does it keep its notes?']);
    const short = await mara.post('/api/experiments', { question: 'Why?' }).expect(422);
    expect((short.body as Problem).errors?.[0].pointer).toBe('/question');
    await mara.post('/api/experiments', { question: 'x'.repeat(301) }).expect(422);
    await mara.patch(`/api/experiments/${experiment.id}`, { owner: 'me' }).expect(422);
  });

  it('leads by the physics of the control run and counts the runs', async () => {
    const { id } = await newExperiment(mara, 'What does the list say?');
    const control = await newRun(mara, id, smallSetup(3), 'First');
    await reach(mara, control.id, 'finished');
    const [item] = (await list('q=what does the list')).items;
    expect(item.physics?.basin).toMatch(/30° × 20°, equatorial plane, slanting coast, 1 island/);
    expect(item.runs).toEqual({ queued: 0, running: 0, finished: 1, stopped: 0, failed: 0 });
    expect(item.moved).toBe('First finished');
    const whole = (await mara.get(`/api/experiments/${id}`)).body as Experiment;
    expect(whole.runList.map((run) => [run.label, run.descent, run.question])).toEqual([
      ['First', 'control', 'What does the list say?'],
    ]);
    const runs = async (query: string) => (await mara.get(`/api/runs?${query}`).expect(200)).body as Page<RunSummary>;
    expect((await runs(`experimentId=${id}&state=finished&q=fir`)).items.map((run) => run.id)).toEqual([control.id]);
    expect((await runs('state=failed')).total).toBe(0);
    expect((await runs(`owner=me&experimentId=${id}`)).total).toBe(1);
    await mara.get('/api/runs?state=lost').expect(400);
  });

  it('shows on the desk what ended since the last visit', async () => {
    const look = async (hand: Hand) => (await hand.get('/api/desk').expect(200)).body as Desk;
    const first = await look(noor);
    expect([first.since, first.recent]).toEqual([null, true]);
    expect(first.disk.quotaBytes).toBe(20e9);
    expect(first.disk.freeBytes).toBeGreaterThan(0);
    // A visit an hour ago, before anything below.
    const hourAgo = new Date(Date.now() - 3_600_000);
    await api.services.desk.write((transaction) =>
      Visit.update({ seenAt: hourAgo, since: null }, { where: { personId: noor.id }, transaction }),
    );
    const { id } = await newExperiment(noor, 'What ended meanwhile?');
    const run = await reach(noor, (await newRun(noor, id, smallSetup(3), 'Meanwhile')).id, 'finished');
    const second = await look(noor);
    expect(second.since).toBe(hourAgo.toISOString());
    expect([second.recent, second.ended[0].id]).toEqual([false, run.id]);
    // Looking again a moment later is still the same visit.
    expect((await look(noor)).since).toBe(hourAgo.toISOString());
  });

  it('hands out presets that the schema and preflight accept', async () => {
    const presets = (await mara.get('/api/presets').expect(200)).body as Preset[];
    expect(presets.some((preset) => preset.setup.basin.name === 'Corvane Basin')).toBe(true);
    expect(new Set(presets.map((preset) => preset.id)).size).toBe(presets.length);
    for (const preset of presets) {
      expect(setupSchema.safeParse(preset.setup).success).toBe(true);
      const found = await mara.post('/api/preflight', preset.setup).expect(200);
      expect([preset.id, (found.body as { verdict: string }).verdict]).not.toContain('refuse');
    }
  });
});
