import { convergenceSchema, type Convergence, type Experiment, type Problem, type Run } from '@halfdeep/contracts';
import { Integration, richardson, transportMeasures, type Setup } from '@halfdeep/ocean';
import { ConvergenceRun, Run as RunRow } from '@halfdeep/store';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { newExperiment, newRun, reach, smallSetup, startRunApi, until, type Hand, type RunApi } from './run-harness';

// Many workers are started one after the other; on a busy machine each takes seconds to begin.
describe('the same setup at half and at twice the resolution', { timeout: 180_000 }, () => {
  let api: RunApi;
  let hand: Hand;
  let reader: Hand;
  let experiment: Experiment;
  let base: Run;

  // Forty days of an enclosed sea: enough for transports that differ between the grids, in a second of work.
  const setup = smallSetup(40, (s) => {
    s.output.sections = [
      { name: 'Equator', along: 'latitude', atDeg: 0 },
      { name: 'Odd', along: 'latitude', atDeg: 5 },
      { name: 'Middle', along: 'longitude', atDeg: 14 },
    ];
    s.output.moorings = [{ name: 'West', longitudeDeg: 8.5, latitudeDeg: 1.5 }];
  });

  beforeAll(async () => {
    api = await startRunApi();
    hand = await api.person('mara', 'modeller');
    reader = await api.person('rhea', 'reviewer');
    experiment = await newExperiment(hand);
    base = await reach(hand, (await newRun(hand, experiment.id, setup)).id, 'finished');
  });
  afterAll(() => api.close());

  const read = async (id = base.id, by = hand) =>
    convergenceSchema.parse((await by.get(`/api/runs/${id}/convergence`).expect(200)).body);
  const order = (coast: string, id = base.id, by = hand) => by.post(`/api/runs/${id}/convergence`, { coast });
  const choice = ({ choices }: Convergence, coast = 'same') => choices.find((one) => one.coast === coast)!;

  it('says what both would cost before anything is queued', async () => {
    const found = await read();
    expect(found).toMatchObject({ runId: base.id, canQueue: true });
    expect(found.choices.map(({ coast }) => coast)).toEqual(['same', 'anew']);
    for (const { levels, result, waitingFor } of found.choices) {
      expect(levels.map(({ role, run, refusal }) => [role, run, refusal])).toEqual([
        ['half', null, null],
        ['twice', null, null],
      ]);
      expect(levels.map(({ plan }) => [plan!.nx, plan!.ny])).toEqual([
        [15, 10],
        [60, 40],
      ]);
      expect(levels[1].plan!.diskBytes).toBeGreaterThan(levels[0].plan!.diskBytes);
      // Four times the cells, and more steps.
      expect(levels[1].plan!.seconds).toBeGreaterThan(16 * levels[0].plan!.seconds);
      expect(levels[0].plan!.notes.join(' ')).toMatch(/“Odd” moves from 5° to/);
      expect([result, waitingFor]).toEqual([
        null,
        'No run has been queued at half the resolution or at twice the resolution.',
      ]);
    }
    expect((await read(base.id, reader)).canQueue).toBe(false);
  });

  it('is for the modeller whose experiment it is', async () => {
    await order('same', base.id, reader).expect(403);
    const other = await api.person('otto', 'modeller');
    await order('same', base.id, other).expect(403);
    expect(await ConvergenceRun.count()).toBe(0);
  });

  it('refuses a coast that it does not know, at the field', async () => {
    const answer = await order('fractal').expect(422);
    expect((answer.body as Problem).errors).toEqual([{ pointer: '/coast', detail: 'The coast is “same” or “anew”.' }]);
  });

  it('queues both once, however often it is asked, and shows the transports of all three', async () => {
    const answers = await Promise.all([order('same'), order('same'), order('same')]);
    expect(answers.map(({ status }) => status)).toEqual([202, 202, 202]);
    await order('same').expect(202);
    expect(await ConvergenceRun.count()).toBe(2);
    expect(await RunRow.count()).toBe(3);

    const { levels } = choice(await read());
    const runs = levels.map(({ run }) => run!);
    expect(runs.map(({ label }) => label)).toEqual(['Control, half resolution', 'Control, twice the resolution']);
    for (const run of runs) {
      expect(run).toMatchObject({ descent: 'sensitivity', parentRunId: base.id, experimentId: experiment.id });
      const changed = run.changes.map(({ pointer }) => pointer);
      expect(changed).toEqual(
        expect.arrayContaining(['/numerics/spacingLongitudeDeg', '/numerics/spacingLatitudeDeg']),
      );
      expect(changed.every((pointer) => /^\/(numerics|basin\/coastSpacing|output\/moorings)/.test(pointer))).toBe(true);
    }
    const finished: Run[] = [];
    for (const { id } of runs) finished.push(await reach(hand, id, 'finished'));

    const found = choice(await read(base.id, reader));
    expect(found.waitingFor).toBeNull();
    const { measures, window } = found.result!;
    expect(window).toEqual({ fromDay: 0, toDay: 40, wholeYear: false });
    expect(measures.map(({ name, quantity }) => `${name} ${quantity}`)).toEqual([
      'Equator mean',
      'Equator amplitude',
      'Odd mean',
      'Odd amplitude',
      'Middle mean',
      'Middle amplitude',
    ]);
    // Held against the core itself, run here on the three setups.
    const transports = [finished[0].setup, setup, finished[1].setup].map(sectionTransports);
    for (const measure of measures) {
      const { section, quantity, half, own, twice, verdict } = measure;
      const [a, b, c] = transports.map((of) => transportMeasures(of[section], 1, 40)![quantity]);
      expect([half, own, twice]).toEqual([a, b, c]);
      if (measure.name === 'Odd') {
        expect(verdict).toBe('line moved');
        expect(measure.sentence).toMatch(/no line at 5° N at half the resolution; the nearest one, [46]° N/);
        continue;
      }
      const expected = richardson(
        a,
        b,
        c,
        2,
        1e-6 * Math.max(...transports.flatMap((of) => of[section].map(Math.abs))),
      );
      expect(measure).toMatchObject({
        verdict: expected.verdict,
        order: expected.order,
        extrapolated: expected.extrapolated,
        gci: expected.gci && { own: expected.gci.medium, twice: expected.gci.fine },
      });
    }
  });

  it('keeps the two coasts apart, and queues just the run that is missing', async () => {
    await order('anew').expect(202);
    expect(await ConvergenceRun.count()).toBe(4);
    const { levels } = choice(await read(), 'anew');
    expect(levels.map(({ run }) => run!.label)).toEqual([
      'Control, half resolution, coast anew',
      'Control, twice the resolution, coast anew',
    ]);
    for (const { run } of levels) await reach(hand, run!.id, 'finished');
    await hand.delete(`/api/runs/${levels[0].run!.id}`).expect(204);
    const less = choice(await read(), 'anew');
    expect(less).toMatchObject({ result: null, waitingFor: 'No run has been queued at half the resolution.' });
    expect(less.levels[1].run!.id).toBe(levels[1].run!.id);
    await order('anew').expect(202);
    const again = choice(await read(), 'anew');
    expect(again.levels[0].run!.id).not.toBe(levels[0].run!.id);
    expect(again.levels[1].run!.id).toBe(levels[1].run!.id);
    await reach(hand, again.levels[0].run!.id, 'finished');
    expect(choice(await read(), 'anew').result).not.toBeNull();
  });

  it('says that a run is still on its way', async () => {
    const one = await reach(hand, (await newRun(hand, experiment.id, smallSetup(4), 'Waits')).id, 'finished');
    await api.services.runs.queue.setPaused(true);
    await order('same', one.id).expect(202);
    expect(choice(await read(one.id)).waitingFor).toBe(
      'The run at half the resolution is queued, the run at twice the resolution is queued.',
    );
    await api.services.runs.queue.setPaused(false);
    await until(
      () => read(one.id),
      (found) => choice(found).result !== null,
    );
  });

  it('has one way to treat a coast that is not there', async () => {
    const open = smallSetup(4, (s) => {
      s.basin.westernCoast = { kind: 'rectangular' };
      s.basin.islands = [];
      s.output.sections = [];
    });
    const run = await reach(hand, (await newRun(hand, experiment.id, open, 'Open')).id, 'finished');
    const found = await read(run.id);
    expect(found.choices.map(({ coast }) => coast)).toEqual(['same']);
    expect(found.choices[0].waitingFor).toMatch(/keeps no sections/);
  });

  it('queues neither of the two when one cannot be made', async () => {
    const odd = smallSetup(4, (s) => (s.basin.eastDeg = 29));
    const run = await reach(hand, (await newRun(hand, experiment.id, odd, 'Odd')).id, 'finished');
    const before = await RunRow.count();
    const { levels } = choice(await read(run.id));
    expect(levels[0]).toMatchObject({ plan: null, refusal: expect.stringMatching(/even number of columns.*29/) });
    expect(levels[1].plan).not.toBeNull();
    const answer = await order('same', run.id).expect(422);
    expect((answer.body as Problem).detail).toMatch(/No run at half the resolution can be queued\..*29/);
    expect(await RunRow.count()).toBe(before);
  });

  it('refuses what has not finished, and what goes on from another run', async () => {
    const longer = await hand.post(`/api/runs/${base.id}/extend`, { label: 'Longer', days: 4 }).expect(202);
    const { id } = longer.body as Run;
    await reach(hand, id, 'finished');
    const answer = await order('same', id).expect(422);
    expect((answer.body as Problem).detail).toMatch(/exists on its own grid alone/);
    await api.services.runs.queue.setPaused(true);
    const waiting = await newRun(hand, experiment.id, smallSetup(4), 'Waiting');
    await order('same', waiting.id).expect(409);
    expect(choice(await read(waiting.id)).waitingFor).toBe('The run itself has not finished.');
    await api.services.runs.queue.setPaused(false);
    await reach(hand, waiting.id, 'finished');
  });

  it('refuses by name what the quota has no room for', async () => {
    const run = await reach(hand, (await newRun(hand, experiment.id, smallSetup(4), 'Full')).id, 'finished');
    const setDisk = (diskBytes: number | null) =>
      api.services.desk.write((transaction) => RunRow.update({ diskBytes }, { where: { id: run.id }, transaction }));
    await setDisk(20e9 - 1000);
    expect(choice(await read(run.id)).levels[1]).toMatchObject({ plan: { verdict: 'refuse' } });
    expect(choice(await read(run.id)).levels[1].refusal).toBeTruthy();
    await order('same', run.id).expect(422);
    await setDisk(run.diskBytes);
  });
});

/** Means over the intervals of every section, Sv, from the core itself. */
function sectionTransports(setup: Setup): number[][] {
  const integration = Integration.start(setup);
  const columns = integration.sectionColumns();
  const out = setup.output.sections.map((): number[] => []);
  const steps = setup.numerics.stepsPerDay * setup.output.sectionIntervalDays;
  while (integration.step < integration.totalSteps) {
    integration.advance(steps);
    const sections = integration.takeSections();
    out.forEach((values, k) => values.push(sections[columns.findIndex(({ name }) => name === `${k}.transport`)]));
  }
  return out;
}
