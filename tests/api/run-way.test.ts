import { CAUTION, type Run } from '@halfdeep/contracts';
import { deriveMap, Integration, recordSteps, VARIABLES, type Frame, type Variable } from '@halfdeep/ocean';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { decodeSlice } from '../../apps/api/src/slices/encode';
import { bytesOf, newExperiment, newRun, reach, smallSetup, startRunApi, type Hand, type RunApi } from './run-harness';

/** Long enough that some frames lie in tiles (sixteen a tile) and some in the tail. */
const setup = smallSetup(61.5);

describe('the way of a run from a question to its fingerprint', () => {
  let api: RunApi;
  let hand: Hand;
  let run: Run;
  // The same setup, integrated here without server, worker and file.
  const direct = Integration.start(setup);
  const frames: Frame[] = [direct.frame()];
  const rows: Record<'sections' | 'moorings' | 'budget', number[][]> = { sections: [], moorings: [], budget: [] };
  const every = recordSteps(setup);

  beforeAll(async () => {
    while (direct.step < direct.totalSteps) {
      direct.advance(1);
      if (direct.step % every.sections === 0) rows.sections.push([...direct.takeSections()]);
      if (direct.step % every.moorings === 0) rows.moorings.push([...direct.takeMoorings()]);
      if (direct.step % every.budget === 0) rows.budget.push([...direct.takeBudget()]);
      if (direct.step % every.frames === 0) frames.push(direct.frame());
    }
    api = await startRunApi();
    hand = await api.person('mara', 'modeller');
    const experiment = await newExperiment(hand);
    run = await newRun(hand, experiment.id, setup);
    expect(run.state).toMatch(/queued|running/);
    expect(run.setup).toEqual(setup);
    expect(run.progress).toMatchObject({ startStep: 0, totalSteps: direct.totalSteps, totalDays: 61.5 });
    run = await reach(hand, run.id, 'finished');
  });
  afterAll(() => api.close());

  /** Bit for bit: NaN equals NaN, −0 does not equal 0. */
  function expectSameBits(found: ArrayLike<number>, expected: ArrayLike<number>): void {
    expect(found.length).toBe(expected.length);
    let wrong = 0;
    for (let k = 0; k < expected.length; k++) if (!Object.is(found[k], expected[k])) wrong++;
    expect(wrong).toBe(0);
  }
  const map = (variable: Variable, k: number) =>
    deriveMap(variable, direct.grid, setup, { ...frames[k], day: frames[k].day });
  const slice = async (path: string) => decodeSlice(await bytesOf(hand.get(`/api/runs/${run.id}/${path}`)));

  it('ends with the fingerprint of the same setup integrated directly', () => {
    expect(run.fingerprint).toEqual(direct.fingerprint());
    expect(run.progress).toMatchObject({ step: direct.totalSteps, cellStepsPerSecond: null, secondsLeft: null });
    expect(run.progress.records).toEqual({
      frames: frames.length,
      sections: rows.sections.length,
      moorings: rows.moorings.length,
      budget: rows.budget.length,
    });
    expect(run.diskBytes).toBeGreaterThan(100_000);
    expect(run.lastState).toMatchObject({ kind: 'state', runId: run.id, startStep: direct.totalSteps });
    expect(run.can).toEqual({ stop: false, resume: false, extend: true, repeat: true, derive: true, delete: true });
  });

  it.each(VARIABLES)('serves maps of %s as the core derives them, bit for bit', async (variable) => {
    for (const record of [0, 7, frames.length - 1]) {
      const { head, data } = await slice(`frames/${record}?variable=${variable}`);
      const expected = map(variable, record);
      expectSameBits(data, expected.data);
      expect(head).toMatchObject({ variable, unit: expected.unit, dtype: 'float32', shape: expected.shape });
      expect(head.axes.map((axis) => axis.values)).toEqual([expected.latDeg, expected.lonDeg]);
      expect([head.day, head.from, head.available]).toEqual([record * 1.5, record, frames.length]);
    }
  });

  it('serves the newest map under “latest”', async () => {
    const { head, data } = await slice('frames/latest?variable=eta');
    expect(head.from).toBe(frames.length - 1);
    expectSameBits(data, frames[frames.length - 1].eta);
  });

  it.each(VARIABLES)(
    'serves space-time slices of %s along a latitude and a longitude, bit for bit',
    async (variable) => {
      const maps = frames.map((_, k) => map(variable, k));
      const [height, width] = maps[0].shape;
      const row = await slice(`hovmoller?variable=${variable}&latitude=2.2`);
      const j = row.head.line!.index;
      expect(row.head.line).toMatchObject({ along: 'latitude', askedDeg: 2.2, atDeg: maps[0].latDeg[j] });
      // The row named is the nearest one.
      const distance = (deg: number) => Math.abs(deg - 2.2);
      expect(distance(maps[0].latDeg[j])).toBe(Math.min(...maps[0].latDeg.map(distance)));
      expect(row.head.shape).toEqual([frames.length, width]);
      expectSameBits(
        row.data,
        maps.flatMap((one) => [...one.data.subarray(j * width, (j + 1) * width)]),
      );
      const column = await slice(`hovmoller?variable=${variable}&longitude=17.9`);
      const i = column.head.line!.index;
      expect(column.head.line).toMatchObject({ along: 'longitude', atDeg: maps[0].lonDeg[i] });
      expectSameBits(
        column.data,
        maps.flatMap((one) => Array.from({ length: height }, (_, k) => one.data[k * width + i])),
      );
      expect(column.head.axes.map((axis) => axis.name)).toEqual(['time', 'latitude']);
    },
  );

  it('cuts space-time slices and series by days, ends included', async () => {
    const { head, data } = await slice('hovmoller?variable=eta&latitude=0.5&from=9&to=30');
    expect(head.axes[0].values).toEqual(Array.from({ length: 15 }, (_, k) => 9 + 1.5 * k));
    expect([head.from, head.available]).toEqual([6, frames.length]);
    const j = head.line!.index;
    expectSameBits(
      data,
      frames.slice(6, 21).flatMap((frame) => [...frame.eta.subarray(j * 30, (j + 1) * 30)]),
    );
    const series = await slice('series/sections?from=10&to=12.5');
    expect(series.head.axes[0].values).toEqual([10, 11, 12]);
    expectSameBits(series.data, rows.sections.slice(9, 12).flat());
    const none = await slice('series/sections?from=500&to=600');
    expect([none.head.shape[0], none.data.length]).toEqual([0, 0]);
  });

  it.each(['sections', 'moorings', 'budget'] as const)(
    'serves the series of %s as float64, bit for bit',
    async (stream) => {
      const { head, data } = await slice(`series/${stream}`);
      expect([head.dtype, head.variable]).toEqual(['float64', null]);
      const columns = { sections: 'sectionColumns', moorings: 'mooringColumns', budget: 'budgetColumns' } as const;
      expect(head.columns).toEqual(direct[columns[stream]]());
      expectSameBits(data, rows[stream].flat());
    },
  );

  it('exports CSV with the caution and formula-safe cells', async () => {
    const answer = await hand.get(`/api/runs/${run.id}/hovmoller?variable=eta&latitude=0.5&format=csv`).expect(200);
    expect(answer.headers['content-type']).toMatch(/^text\/csv/);
    expect(answer.headers['content-disposition']).toMatch(/attachment; filename=.*\.csv/);
    const lines = answer.text.trimEnd().split('\r\n');
    expect(lines).toContain(`# ${CAUTION}`);
    const body = lines.filter((line) => !line.startsWith('#'));
    expect(body[0]).toBe('time (d),longitude (° E),Thickness anomaly (m)');
    expect(body).toHaveLength(1 + frames.length * 30);
    const [day, lon, eta] = body[1 + 12 * 30 + 11].split(',').map(Number);
    const { head, data } = await slice('hovmoller?variable=eta&latitude=0.5');
    expect([day, lon]).toEqual([head.axes[0].values[12], head.axes[1].values[11]]);
    expect(Math.fround(eta)).toBe(data[12 * 30 + 11]);
  });

  it('refuses a slice that is not there, in words', async () => {
    const wrong = async (path: string, status: number, words: RegExp) => {
      const answer = await hand.get(`/api/runs/${run.id}/${path}`).expect(status);
      expect(answer.headers['content-type']).toMatch(/^application\/problem\+json/);
      expect(JSON.stringify(answer.body)).toMatch(words);
    };
    await wrong('frames/999?variable=eta', 404, /holds 42 frames, counted from 0; frame 999/);
    await wrong('frames/-1?variable=eta', 400, /whole number from 0/);
    await wrong('frames/0?variable=salt', 400, /one of eta, h, u/);
    await wrong('frames/0', 400, /variable/);
    await wrong('hovmoller?variable=eta', 400, /either latitude or longitude/);
    await wrong('hovmoller?variable=eta&latitude=1&longitude=1', 400, /either latitude or longitude/);
    await wrong('hovmoller?variable=eta&latitude=', 400, /latitude must be a number/i);
    for (const number of ['NaN', 'Infinity', '-Infinity', '1e400', '1,5', 'null'])
      for (const name of ['latitude', 'longitude', 'latitude=0&from', 'latitude=0&to'])
        await wrong(`hovmoller?variable=eta&${name}=${number}`, 400, /must be (a number|between)/i);
    await wrong('series/sections?from=NaN', 400, /must be a number/i);
    await wrong('frames/999999999999?variable=eta', 400, /whole number from 0/);
    await wrong('hovmoller?variable=eta&latitude=95', 400, /between -80 and 80/);
    await wrong('series/tides', 400, /sections|moorings|budget/);
  });

  it('says that a run which has not begun has no results', async () => {
    const other = await newExperiment(hand, 'What waits?');
    await api.services.runs.queue.setPaused(true);
    const waiting = await newRun(hand, other.id, smallSetup(3));
    const answer = await hand.get(`/api/runs/${waiting.id}/frames/latest?variable=eta`).expect(409);
    expect((answer.body as { detail: string }).detail).toBe('“Control” is queued and has no results yet.');
    await api.services.runs.queue.setPaused(false);
    await reach(hand, waiting.id, 'finished');
  });
});
