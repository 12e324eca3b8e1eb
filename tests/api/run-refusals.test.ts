import { type Experiment, type Problem, type Run } from '@halfdeep/contracts';
import { type Setup } from '@halfdeep/ocean';
import { Run as RunRow, runPaths } from '@halfdeep/store';
import { writeFile } from 'node:fs/promises';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { newExperiment, newRun, reach, runFiles, smallSetup, startRunApi, type Hand, type RunApi } from './run-harness';

/** Six hours a step at half a degree: long waves cross a cell in less. */
const unstable = (setup: Setup) =>
  Object.assign(setup.numerics, { spacingLongitudeDeg: 0.5, spacingLatitudeDeg: 0.5, stepsPerDay: 4 });

describe('a run that is refused', () => {
  let api: RunApi;
  let hand: Hand;
  let experiment: Experiment;
  let parent: Run;

  beforeAll(async () => {
    api = await startRunApi();
    hand = await api.person('mara', 'modeller');
    experiment = await newExperiment(hand);
    parent = await reach(hand, (await newRun(hand, experiment.id, smallSetup(3))).id, 'finished');
  });
  afterAll(() => api.close());

  /** Asks for a run; expects a refusal that names the pointers, and that nothing is left of it. */
  async function refused(body: object, status: number, pointers: string[], words: RegExp): Promise<Problem> {
    const before = { rows: await RunRow.count(), files: await runFiles(api) };
    const answer = await hand.post(`/api/experiments/${experiment.id}/runs`, body);
    expect(answer.status).toBe(status);
    expect(answer.headers['content-type']).toMatch(/^application\/problem\+json/);
    const problem = answer.body as Problem;
    const named = problem.errors?.map((error) => error.pointer) ?? [];
    for (const pointer of pointers) expect(named).toContain(pointer);
    expect(JSON.stringify(problem)).toMatch(words);
    expect(await RunRow.count()).toBe(before.rows);
    expect(await runFiles(api)).toEqual(before.files);
    return problem;
  }
  const withSetup = (change: (setup: Setup) => void) => ({ label: 'Wrong', setup: smallSetup(30, change) });

  it.each<[string, (setup: Setup) => void, string, RegExp]>([
    [
      'a layer too thin',
      (s) => (s.layer.restThicknessM = 3),
      '/setup/layer/restThicknessM',
      /between 10 and 5000 m; 3 arr/,
    ],
    [
      'a text for a number',
      (s) => ((s.layer as { reducedGravityMS2: unknown }).reducedGravityMS2 = '0.03'),
      '/setup/layer/reducedGravityMS2',
      /\\"0.03\\" arrived/,
    ],
    [
      'steps that are no multiple of 4',
      (s) => (s.numerics.stepsPerDay = 18),
      '/setup/numerics/stepsPerDay',
      /multiple of 4/,
    ],
    [
      'a section outside',
      (s) => (s.output.sections[0].atDeg = 50),
      '/setup/output/sections/0/atDeg',
      /inside the basin/,
    ],
    ['edges the wrong way round', (s) => (s.basin.northDeg = -12), '/setup/basin/northDeg', /north of the south edge/],
    ['a field that does not exist', (s) => Object.assign(s.layer, { salt: 35 }), '/setup/layer', /salt/],
  ])('names the field of %s', async (_, change, pointer, words) => {
    await refused(withSetup(change), 422, [pointer], words);
  });

  it('names a missing label and a missing setup', async () => {
    await refused({ setup: smallSetup(3) }, 422, ['/label'], /label/);
    await refused({ label: 'x' }, 422, ['/setup'], /setup/);
  });

  it('refuses an unstable step with the field and the remedy, which then is accepted', async () => {
    const setup = smallSetup(3, unstable);
    const problem = await refused({ label: 'Wrong', setup }, 422, ['/setup/numerics/stepsPerDay'], /Preflight refuses/);
    const detail = problem.errors?.find((error) => error.pointer === '/setup/numerics/stepsPerDay')?.detail ?? '';
    const remedy = /\/setup\/numerics\/stepsPerDay = (\d+)/.exec(detail);
    expect(remedy).not.toBeNull();
    setup.numerics.stepsPerDay = Number(remedy![1]);
    await reach(hand, (await newRun(hand, experiment.id, setup, 'Cured')).id, 'finished');
  });

  it('refuses an oversize grid with the limit', async () => {
    await refused(
      withSetup((s) => Object.assign(s.numerics, { spacingLongitudeDeg: 0.005, spacingLatitudeDeg: 0.005 })),
      422,
      ['/setup/numerics/spacingLongitudeDeg', '/setup/numerics/spacingLatitudeDeg'],
      /4.?000.?000/,
    );
  });

  it('refuses results that the disk has no room for', async () => {
    await refused(
      withSetup((s) => {
        Object.assign(s.numerics, { spacingLongitudeDeg: 0.05, spacingLatitudeDeg: 0.05, stepsPerDay: 120 });
        s.length.days = 20_000;
        s.output.frameIntervalDays = 0.25;
      }),
      422,
      ['/setup/output/frameIntervalDays'],
      /GB/,
    );
  });

  it('refuses a parent that is not there', async () => {
    const nobody = '00000000-0000-4000-8000-000000000000';
    await refused({ label: 'x', setup: smallSetup(3), parentRunId: nobody }, 422, ['/parentRunId'], /no run/);
  });

  it('holds a start state against the run that it names', async () => {
    const start = parent.lastState!;
    const from = (change: Partial<typeof start>, other: (setup: Setup) => void = () => undefined) =>
      withSetup((s) => {
        s.start = { ...start, ...change };
        other(s);
      });
    const hash = 'ab'.repeat(32);
    await refused(from({ fingerprint: hash }), 422, ['/setup/start/fingerprint'], /has fingerprint/);
    await refused(from({ stateSha256: hash }), 422, ['/setup/start/stateSha256'], /has stateSha256/);
    await refused(from({ startStep: 40 }), 422, ['/setup/start/startStep'], /has startStep 48; 40 arrived/);
    const nobody = '00000000-0000-4000-8000-000000000000';
    await refused(from({ runId: nobody }), 422, ['/setup/start/runId'], /There is no run/);
    await refused(
      from({}, (s) => (s.numerics.spacingLongitudeDeg = 2)),
      422,
      ['/setup/numerics/spacingLongitudeDeg'],
      /keeps its grid/,
    );
    await refused(
      from({}, (s) => (s.basin.islands = [])),
      422,
      ['/setup/numerics/spacingLongitudeDeg'],
      /coast or the islands/,
    );
    // With everything right it runs, from the state that was copied.
    const body = from({});
    const run = await reach(hand, (await newRun(hand, experiment.id, body.setup, 'Goes on')).id, 'finished');
    expect(run.progress).toMatchObject({ startStep: 48, totalSteps: 48 + 30 * 16, step: 48 + 30 * 16 });
  });

  it('keeps nothing of a run whose start state is damaged', async () => {
    const last = runPaths(api.varFolder, parent.id).last;
    await writeFile(last, 'not a state');
    const setup = smallSetup(30, (s) => (s.start = { ...parent.lastState! }));
    await refused({ label: 'x', setup }, 409, [], /damaged/);
    const extended = await hand.post(`/api/runs/${parent.id}/extend`, { label: 'Longer', days: 3 });
    expect(extended.status).toBe(409);
  });

  it('checks a setup on request, with the disk and the speed of this machine', async () => {
    const answer = await hand.post('/api/preflight', smallSetup(30)).expect(200);
    const found = answer.body as {
      verdict: string;
      cost: { cellStepsPerSecond: number; cells: number };
      checks: { id: string }[];
    };
    expect(found.verdict).not.toBe('refuse');
    expect(found.cost).toMatchObject({ cells: 600 });
    expect(found.cost.cellStepsPerSecond).toBeGreaterThan(1e4);
    expect(JSON.stringify(found.checks)).toMatch(/disk/i);
    const refusedOne = await hand.post('/api/preflight', smallSetup(30, unstable)).expect(200);
    expect((refusedOne.body as { verdict: string }).verdict).toBe('refuse');
    const wrong = await hand.post('/api/preflight', { ...smallSetup(30), length: { days: 0 } }).expect(422);
    expect((wrong.body as Problem).errors?.map((error) => error.pointer)).toContain('/length/days');
  });
});
