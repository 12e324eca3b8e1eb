import { type ExperimentSummary, type Page, type Run } from '@halfdeep/contracts';
import { corvaneFamilySetup, corvaneSetup } from '@halfdeep/ocean';
import { DeskSetting, Experiment, Run as RunRow } from '@halfdeep/store';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { queueDemonstration } from '../../apps/api/src/demo/demonstration';
import { startRunApi, type Hand, type RunApi } from './run-harness';

const LABELS = [
  'Control',
  'Strong wind, +20 %',
  'Weak wind, −20 %',
  'Nonlinear control',
  'Nonlinear, strong wind, +20 %',
  'Nonlinear, weak wind, −20 %',
  'Family, season × 1.0',
  'Family, season × 0.6',
  'Family, season × 0.8',
  'Family, season × 1.2',
  'Family, season × 1.4',
];

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

  it('queues the linear runs, their nonlinear counterparts and the family in one experiment', async () => {
    await queueIt();
    const page = (await hand.get('/api/experiments').expect(200)).body as Page<ExperimentSummary>;
    expect(page.items).toMatchObject([{ owner: { id: hand.id }, runs: { queued: 11 }, can: { queueRuns: true } }]);
    expect(page.items[0].question).toMatch(/Halcyon wind/);
    const rows = await runs();
    expect(rows.map((row) => row.label)).toEqual(LABELS);
    expect(rows.map((row) => row.setup)).toEqual([
      ...[1, 1.2, 0.8].map((strength) => corvaneSetup(strength)),
      ...[1, 1.2, 0.8].map((strength) => corvaneSetup(strength, 'nonlinear')),
      ...[1, 0.6, 0.8, 1.2, 1.4].map(corvaneFamilySetup),
    ]);
    const shown = await Promise.all(rows.map(async ({ id }) => (await hand.get(`/api/runs/${id}`)).body as Run));
    expect(shown.map((run) => [run.descent, run.queuePosition])).toEqual(
      LABELS.map((_, k) => [k === 0 ? 'control' : 'sensitivity', k + 1]),
    );
    // Strong and weak from their control, the nonlinear control from the linear one, the family from its own.
    const parents = [null, 0, 0, 0, 3, 3, 3, 6, 6, 6, 6];
    expect(shown.map((run) => run.parentRunId)).toEqual(parents.map((k) => (k === null ? null : rows[k].id)));
    expect(shown[1].changes).toMatchObject([{ pointer: '/wind/seasonalStrength', from: '1.00', to: '1.20' }]);
    expect(shown[3].changes?.map(({ label, from, to }) => `${label} ${from} → ${to}`)).toEqual([
      'entrainment none → below 60 m in 10 d',
      'equations linear → nonlinear',
      'steps a day 16 → 20',
    ]);
    expect(shown[10].changes).toMatchObject([{ pointer: '/wind/seasonalStrength', from: '1.00', to: '1.40' }]);
    // The Corvane runs pass every row; half-degree cells are a hair wider than c/|f| at the wall.
    for (const run of shown.slice(0, 6))
      expect(run.preflight.checks.filter(({ verdict }) => verdict !== 'pass')).toEqual([]);
    for (const run of shown.slice(6)) expect(run.preflight.verdict).toBe('caution');
  });

  it('is made once: the next start changes nothing, and what was deleted stays deleted', async () => {
    const before = (await runs()).map((row) => row.id);
    await queueIt();
    expect((await runs()).map((row) => row.id)).toEqual(before);
    await hand.delete(`/api/runs/${before[2]}`).expect(204);
    await queueIt();
    expect((await runs()).map((row) => row.id)).toEqual(before.filter((_, k) => k !== 2));
  });

  it('is completed by the next start when the first was cut short', async () => {
    const [{ id: experimentId }] = await Experiment.findAll();
    await api.services.desk.write((transaction) =>
      DeskSetting.keep('demonstration experiment', { experimentId, complete: false }, transaction),
    );
    await queueIt();
    expect((await runs()).map((row) => row.label).sort()).toEqual([...LABELS].sort());
    expect(await Experiment.count()).toBe(1);
  });
});
