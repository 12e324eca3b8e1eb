import { type ExperimentSummary, type Page, type Run } from '@halfdeep/contracts';
import { corvaneSetup } from '@halfdeep/ocean';
import { DeskSetting, Experiment, Run as RunRow } from '@halfdeep/store';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { queueDemonstration } from '../../apps/api/src/demo/demonstration';
import { startRunApi, type Hand, type RunApi } from './run-harness';

describe('the demonstration scenario', () => {
  let api: RunApi;
  let hand: Hand;
  const queueIt = (email = 'modeller@desk.example') =>
    queueDemonstration({ ...api.services.runs, desk: api.services.desk }, email);
  const runs = () => RunRow.findAll({ order: [['createdAt', 'ASC']] });

  beforeAll(async () => {
    api = await startRunApi();
    await api.services.runs.queue.setPaused(true); // what is queued is looked at here, not computed
    hand = await api.person('modeller', 'modeller');
  });
  afterAll(() => api.close());

  it('needs its modeller, and makes nothing without', async () => {
    await expect(queueIt('nobody@desk.example')).rejects.toThrow(/needs the account nobody@desk.example/);
    expect([await Experiment.count(), await RunRow.count()]).toEqual([0, 0]);
  });

  it('queues control, strong and weak run of the Corvane setup in one experiment', async () => {
    await queueIt();
    const page = (await hand.get('/api/experiments').expect(200)).body as Page<ExperimentSummary>;
    expect(page.items).toMatchObject([{ owner: { id: hand.id }, runs: { queued: 3 }, can: { queueRuns: true } }]);
    expect(page.items[0].question).toMatch(/Halcyon wind/);
    const rows = await runs();
    expect(rows.map((row) => row.setup)).toEqual([corvaneSetup(1), corvaneSetup(1.2), corvaneSetup(0.8)]);
    const shown = await Promise.all(rows.map(async ({ id }) => (await hand.get(`/api/runs/${id}`)).body as Run));
    expect(shown.map((run) => [run.descent, run.queuePosition])).toEqual([
      ['control', 1],
      ['sensitivity', 2],
      ['sensitivity', 3],
    ]);
    expect(shown[1].changes).toMatchObject([{ pointer: '/wind/seasonalStrength', from: '1.00', to: '1.20' }]);
    expect(shown[2].parentRunId).toBe(rows[0].id);
    for (const run of shown) expect(run.preflight.checks.filter((check) => check.verdict !== 'pass')).toEqual([]);
  });

  it('is made once: the next start changes nothing, and what was deleted stays deleted', async () => {
    const before = (await runs()).map((row) => row.id);
    await queueIt();
    expect((await runs()).map((row) => row.id)).toEqual(before);
    await hand.delete(`/api/runs/${before[2]}`).expect(204);
    await queueIt();
    expect((await runs()).map((row) => row.id)).toEqual(before.slice(0, 2));
  });

  it('is completed by the next start when the first was cut short', async () => {
    const [{ id: experimentId }] = await Experiment.findAll();
    await api.services.desk.write((transaction) =>
      DeskSetting.keep('demonstration experiment', { experimentId, complete: false }, transaction),
    );
    await queueIt();
    expect((await runs()).map((row) => row.label)).toEqual(['Control', 'Strong wind, +20 %', 'Weak wind, −20 %']);
    expect(await Experiment.count()).toBe(1);
  });
});
