import { type Experiment, type Run, type SideBySide } from '@halfdeep/contracts';
import { Integration, recordSteps, type Frame, type Setup } from '@halfdeep/ocean';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { newExperiment, newRun, reach, smallSetup, startRunApi, type Hand, type RunApi } from './run-harness';

/** A season alone, no steady wind: twice the strength is twice of everything. */
const seasonal = (strength: number, change: (setup: Setup) => void = () => undefined) =>
  smallSetup(42, (s) => {
    s.wind.components = s.wind.components.filter((component) => component.season.annual.amplitude !== 0);
    s.wind.seasonalStrength = strength;
    change(s);
  });

/** Fields at cell centres, straight from the definitions; land NaN. */
function centres({ eta, u, v }: Frame, nx: number, ny: number) {
  const at = (f: (i: number, j: number) => number) =>
    Array.from({ length: nx * ny }, (_, k) =>
      Number.isNaN(eta[k]) ? NaN : Math.fround(f(k % nx, Math.floor(k / nx))),
    );
  const uc = (i: number, j: number) => (u[j * (nx + 1) + i] + u[j * (nx + 1) + i + 1]) / 2;
  const vc = (i: number, j: number) => (v[j * nx + i] + v[(j + 1) * nx + i]) / 2;
  return {
    eta: Array.from(eta),
    uCentre: at(uc),
    vCentre: at(vc),
    speed: at((i, j) => Math.hypot(uc(i, j), vc(i, j))),
  };
}
type Centres = ReturnType<typeof centres>;
const NAMES = ['eta', 'uCentre', 'vCentre', 'speed'] as const;

function integrate(setup: Setup): Centres[] {
  const run = Integration.start(setup);
  const frames = [centres(run.frame(), run.grid.nx, run.grid.ny)];
  const every = recordSteps(setup).frames;
  while (run.step + every <= run.totalSteps) {
    run.advance(every);
    frames.push(centres(run.frame(), run.grid.nx, run.grid.ny));
  }
  return frames;
}

/** RMS and Pearson's r over all points, equal weights: the cells of a plane have one area. */
function naive(a: Centres[], b: Centres[], name: (typeof NAMES)[number]) {
  const pairs = a.flatMap((frame, t) => frame[name].map((value, k) => [value, b[t][name][k]]));
  const kept = pairs.filter(([p, q]) => !Number.isNaN(p) && !Number.isNaN(q));
  const mean = (f: (pair: number[]) => number) => kept.reduce((sum, pair) => sum + f(pair), 0) / kept.length;
  const [meanA, meanB] = [mean(([p]) => p), mean(([, q]) => q)];
  const spread = (f: (pair: number[]) => number, about: number) => Math.sqrt(mean((pair) => (f(pair) - about) ** 2));
  return {
    rmsDifference: Math.sqrt(mean(([p, q]) => (p - q) ** 2)),
    correlation:
      mean(([p, q]) => (p - meanA) * (q - meanB)) / (spread(([p]) => p, meanA) * spread(([, q]) => q, meanB)),
    rmsA: Math.sqrt(mean(([p]) => p ** 2)),
    rmsB: Math.sqrt(mean(([, q]) => q ** 2)),
  };
}

describe('two runs side by side', () => {
  let api: RunApi;
  let hand: Hand;
  let experiment: Experiment;
  let a: Run;

  beforeAll(async () => {
    api = await startRunApi();
    hand = await api.person('mara', 'modeller');
    experiment = await newExperiment(hand);
    a = await finished(seasonal(1), 'A');
  });
  afterAll(() => api.close());

  const finished = async (setup: Setup, label = 'B') =>
    reach(hand, (await newRun(hand, experiment.id, setup, label)).id, 'finished');
  const compare = async (first: Run, second: Run) =>
    (await hand.get(`/api/side-by-side?a=${first.id}&b=${second.id}`).expect(200)).body as SideBySide;
  const measure = (side: SideBySide, name: string) => side.measures.find((row) => row.variable === name)!;
  function expectNear(found: number | null, expected: number): void {
    expect(found).not.toBeNull();
    expect(Math.abs(found! - expected)).toBeLessThanOrEqual(1e-9 * Math.abs(expected) + 1e-15);
  }

  it('gives the measures of the definitions, over all common frames and cells', async () => {
    const setup = seasonal(1, (s) => (s.layer.restThicknessM = 150));
    const side = await compare(a, await finished(setup));
    expect(side).toMatchObject({ reason: null, regridding: 'same grid', commonDays: { from: 0, to: 42, records: 29 } });
    expect(side.changes).toMatchObject([{ pointer: '/layer/restThicknessM', from: '200', to: '150' }]);
    expect([side.a.label, side.b.label]).toEqual(['A', 'B']);
    const [framesA, framesB] = [integrate(seasonal(1)), integrate(setup)];
    for (const name of NAMES) {
      const expected = naive(framesA, framesB, name);
      const found = measure(side, name);
      for (const key of ['rmsDifference', 'correlation', 'rmsA', 'rmsB'] as const)
        expectNear(found[key], expected[key]);
    }
    expect(measure(side, 'eta').unit).toBe('m');
  });

  it('is 0 and 1 for a run beside itself', async () => {
    for (const row of (await compare(a, a)).measures) {
      expect(row.rmsDifference).toBe(0);
      expect(row.correlation).toBeCloseTo(1, 12);
      expect(row.rmsA).toBeGreaterThan(0);
    }
  });

  it('sees that a linear run of twice the season is twice as strong', async () => {
    for (const row of (await compare(a, await finished(seasonal(2)))).measures) {
      expect(row.correlation).toBeCloseTo(1, 6);
      expect(row.rmsB! / row.rmsA!).toBeCloseTo(2, 5);
      expect(row.rmsDifference! / row.rmsA!).toBeCloseTo(1, 5);
    }
  });

  it('compares at common moments alone when the intervals differ', async () => {
    const side = await compare(a, await finished(seasonal(1, (s) => (s.output.frameIntervalDays = 2.5))));
    expect(side.commonDays).toEqual({ from: 0, to: 37.5, records: 6 });
    for (const row of side.measures) expect(row.rmsDifference).toBe(0);
  });

  it('brings the finer grid onto the coarser one, whichever of the two it is', async () => {
    const coarse = (s: Setup) => Object.assign(s.numerics, { spacingLongitudeDeg: 2, spacingLatitudeDeg: 2 });
    const b = await finished(seasonal(1, coarse), 'Coarse');
    // Between cells of 1° the centres of 2° lie in the middle of four: bilinear is their mean, land when one is land.
    const fine = integrate(seasonal(1)).map((frame) =>
      Object.fromEntries(
        NAMES.map((name) => [
          name,
          Array.from({ length: 150 }, (_, k) => {
            const at = 60 * Math.floor(k / 15) + 2 * (k % 15);
            return [at, at + 1, at + 30, at + 31].reduce((sum, n) => sum + frame[name][n], 0) / 4;
          }),
        ]),
      ),
    ) as Centres[];
    const expected = naive(fine, integrate(seasonal(1, coarse)), 'vCentre');
    const side = await compare(a, b);
    expect(side.regridding).toMatch(/^A was brought onto the coarser grid of B \(15 × 10 cells\) by bilinear/);
    for (const key of ['rmsDifference', 'correlation', 'rmsA', 'rmsB'] as const)
      expectNear(measure(side, 'vCentre')[key], expected[key]);
    const turned = await compare(b, a);
    expect(turned.regridding).toMatch(/^B was brought onto the coarser grid of A/);
    expectNear(measure(turned, 'vCentre').rmsDifference, expected.rmsDifference);
    expectNear(measure(turned, 'vCentre').rmsB, expected.rmsA);
  });

  it('leaves out what is land in either run', async () => {
    const side = await compare(a, await finished(seasonal(1, (s) => (s.basin.islands = []))));
    expect(side.regridding).toBe('same grid; cells that are land in either run are left out');
    expect(measure(side, 'eta').correlation).toBeGreaterThan(0.5);
  });

  it('gives a reason instead of numbers without a common place or time', async () => {
    const elsewhere = await finished(
      seasonal(1, (s) => {
        Object.assign(s.basin, { westDeg: 100, eastDeg: 130, islands: [], westernCoast: { kind: 'rectangular' } });
        s.output.moorings = [];
      }),
    );
    const far = await compare(a, elsewhere);
    expect(far.reason).toBe('The two basins have no place in common.');
    expect(far.measures.every((row) => row.rmsDifference === null && row.correlation === null)).toBe(true);
    const short = await finished(smallSetup(3));
    const extended = await hand.post(`/api/runs/${a.id}/extend`, { label: 'Later', days: 3 }).expect(202);
    const later = await reach(hand, (extended.body as Run).id, 'finished');
    const apart = await compare(short, later);
    expect([apart.commonDays, apart.reason]).toEqual([
      null,
      'The two runs have no moment in common at which both kept a frame.',
    ]);
    await api.services.runs.queue.setPaused(true);
    const waiting = await newRun(hand, experiment.id, smallSetup(3), 'Waiting');
    expect((await compare(a, waiting)).reason).toBe('“Waiting” has no frames yet.');
  });

  it('refuses what cannot be put side by side', async () => {
    await hand.get('/api/side-by-side').expect(400);
    await hand.get(`/api/side-by-side?a=${a.id}&b=tides`).expect(400);
    await hand.get(`/api/side-by-side?a=${a.id}&b=00000000-0000-4000-8000-000000000000`).expect(404);
  });
});
