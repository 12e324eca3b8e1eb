// eslint-disable-next-line no-restricted-imports -- a second SHA-256, to check the library's against
import { createHash } from 'node:crypto';
import { describe, expect, it } from 'vitest';
import type { Setup, WindPattern } from '../setup';
import { smallSetup } from '../testing/setups';
import { unpack } from './container';
import { IntegrationFailure } from './failure';
import { Integration } from './integration';

const base = smallSetup();
const nonlinear = (change: Partial<Setup> = {}): Setup => ({
  ...base,
  numerics: { ...base.numerics, equations: 'nonlinear' },
  ...change,
});
const entrainment = { onsetThicknessM: 60, timescaleDays: 10, detrainment: 'none' } as const;
const calm = { amplitude: 0, peakDay: 0 };
const blowing = (pattern: WindPattern): Setup['wind'] => ({
  components: [{ name: '', pattern, season: { mean: 1, switchOnDays: 0, annual: calm, semiannual: calm } }],
  seasonalStrength: 1,
  stressFloorM: 0,
});
const uniform = (eastwardNM2: number) => blowing({ kind: 'uniform', eastwardNM2, northwardNM2: 0 });
const thinLayer = { ...base.layer, restThicknessM: 60, minimumThicknessM: 20 };

function spunUp(setup: Setup, steps = 60): Integration {
  const run = Integration.start(setup);
  run.advance(steps);
  return run;
}

function failureOf(work: () => void): IntegrationFailure['report'] {
  try {
    work();
  } catch (error) {
    if (error instanceof IntegrationFailure) return error.report;
    throw error;
  }
  throw new Error('It did not fail.');
}

describe('a nonlinear run', () => {
  const setup = nonlinear({
    layer: { ...thinLayer, entrainment, dampingPerS: 1e-7 },
    wind: { ...uniform(-0.03), stressFloorM: 30 },
    friction: { ...base.friction, viscosityM2S: 4000 },
  });

  it('is not the linear one, and has η = h − H in its frames', () => {
    const [run, linear] = [spunUp(nonlinear()), spunUp(base)];
    const [found, other] = [run.fields(), linear.fields()];
    const size = Math.max(...other.eta.map(Math.abs));
    const apart = Math.max(...found.eta.map((eta, k) => Math.abs(eta - other.eta[k])));
    expect(apart / size).toBeGreaterThan(1e-3);
    expect(apart / size).toBeLessThan(0.2);
    run.grid.mask.forEach((wet, k) =>
      expect(Object.is(run.frame().eta[k], wet ? Math.fround(found.eta[k]) : NaN)).toBe(true),
    );
  }, 20_000);

  it('has its fingerprint over u, v and h', () => {
    const run = spunUp(setup);
    const { arrays } = unpack(run.lastState(), 'state');
    expect(Object.keys(arrays)).toContain('h previous');
    const hash = createHash('sha256').update(Buffer.from(Uint32Array.of(32, 41, 33, 40, 32, 40).buffer));
    for (const name of ['u', 'v', 'h'])
      hash.update(Buffer.from(arrays[name].map((value) => (value === 0 ? 0 : value)).buffer));
    expect(run.fingerprint().sha256).toBe(hash.digest('hex'));
    arrays['h'].forEach((h, k) => expect(h).toBe(run.grid.mask[k] ? run.fields().eta[k] + 60 : 0));
  });

  it('keeps its bits: a change that alters them raises CORE_VERSION with this value', () => {
    // Computed by this core; it guards against a change of bits by accident.
    const { coreVersion, sha256 } = spunUp(setup, 240).fingerprint();
    expect([coreVersion, sha256]).toEqual(['2', 'b205e97897a8dd4e4608d596def8f4df3b8557a2f876023547e1bcbec92c2ed6']);
  });

  it('goes on from a checkpoint to the same bits and records, however it is cut', () => {
    const whole = spunUp(setup, 140);
    const first = spunUp(setup, 53);
    const second = Integration.restore(setup, first.checkpoint());
    for (const part of [1, 6, 80]) second.advance(part);
    expect(second.fingerprint()).toEqual(whole.fingerprint());
    expect(second.checkpoint()).toEqual(whole.checkpoint());
    expect(second.takeBudget()).toEqual(whole.takeBudget());
    expect(second.takeSections()).toEqual(whole.takeSections());
  });

  it.each([
    ['with damping and entrainment', setup],
    ['as the linear one is set up', nonlinear()],
    [
      'with detrainment, sponges and a place of more viscosity, periodic',
      nonlinear({
        basin: {
          ...base.basin,
          zonallyPeriodic: true,
          sponges: [{ edge: 'south', widthDeg: 2, peakRatePerS: null, tapersWind: false }],
        },
        layer: { ...thinLayer, entrainment: { ...entrainment, detrainment: 'uniform' } },
        friction: {
          ...base.friction,
          slip: 'none',
          viscosityPatches: [
            { name: '', addedM2S: 2000, longitudeDeg: 5, latitudeDeg: 0, widthLongitudeDeg: 2, widthLatitudeDeg: 2 },
          ],
        },
      }),
    ],
  ])('closes its budgets of mass and energy, and its sections, to 1e-11: %s', (_name, of) => {
    const run = Integration.start(of);
    const names = run.budgetColumns().map(({ name }) => name);
    const sections = run.sectionColumns().map(({ name }) => name);
    let north = run.takeSections()[sections.indexOf('0.volumeNorth')];
    let [worst, largest] = [0, 0];
    for (let n = 0; n < 5; n++) {
      run.advance(12);
      const values = run.takeBudget();
      const at = (name: string) => values[names.indexOf(name)];
      expect(values).toHaveLength(names.length);
      const works = names.filter((name) => name.endsWith('Work')).map((name) => Math.abs(at(name)));
      expect(Math.abs(at('energyResidual')) / Math.max(...works)).toBeLessThan(1e-11);
      const sources = ['massDamping', 'massEntrainment', 'massSponge'].filter((name) => names.includes(name));
      // Without a source the mass is that of the layer, to round-off.
      const layer = (1025 * of.layer.restThicknessM * run.grid.wetCells * run.grid.dxC[0] * run.grid.dy) / 1e12;
      const most = Math.max(...sources.map((name) => Math.abs(at(name))), 1e-3 * layer);
      expect(Math.abs(at('massResidual')) / most).toBeLessThan(1e-11);
      if (of.layer.entrainment?.detrainment === 'none') expect(at('massEntrainment')).toBeGreaterThan(0);
      const record = run.takeSections();
      const flow = (name: string) => (sections.includes(name) ? record[sections.indexOf(name)] : 0);
      const gained = ((flow('0.volumeNorth') - north) * 1e9) / 86_400 / 1e6;
      north = flow('0.volumeNorth');
      const residual = flow('0.transport') + flow('0.dampingNorth') + flow('0.entrainedNorth') - gained;
      const flows = ['0.transport', '0.dampingNorth', '0.entrainedNorth'].map((name) => Math.abs(flow(name)));
      largest = Math.max(largest, ...flows);
      worst = Math.max(worst, Math.abs(residual));
    }
    expect(worst / largest).toBeLessThan(1e-11);
  });

  it('starts from a linear state and a linear one from its own, with h kept', () => {
    const childOf = (parent: Integration, state: Uint8Array, of: Setup): Setup => ({
      ...of,
      start: {
        kind: 'state',
        runId: '00000000-0000-4000-8000-000000000001',
        fingerprint: parent.fingerprint().sha256,
        stateSha256: Integration.stateSha256(state),
        startStep: parent.step,
        stepsPerDay: parent.setup.numerics.stepsPerDay,
      },
    });
    const linear = spunUp(base);
    const state = linear.lastState();
    const child = Integration.start(
      childOf(linear, state, nonlinear({ layer: { ...base.layer, restThicknessM: 190 } })),
      state,
    );
    child.grid.mask.forEach((wet, k) =>
      expect(child.fields().eta[k]).toBeCloseTo(wet ? linear.fields().eta[k] + 10 : 0, 11),
    );
    child.advance(20);
    const back = child.lastState();
    const grandchild = Integration.start(
      childOf(child, back, { ...base, layer: { ...base.layer, restThicknessM: 180 } }),
      back,
    );
    child.grid.mask.forEach((wet, k) =>
      expect(grandchild.fields().eta[k]).toBeCloseTo(wet ? child.fields().eta[k] + 10 : 0, 11),
    );
    // The same equations and H take the very bits.
    const same = Integration.start(childOf(child, back, child.setup), back);
    expect(same.fingerprint()).toEqual(child.fingerprint());
    const hollow = nonlinear({
      start: {
        kind: 'bump',
        amplitudeM: -250,
        longitudeDeg: 5,
        latitudeDeg: 1,
        widthLongitudeDeg: 1,
        widthLatitudeDeg: 1,
      },
    });
    expect(() => Integration.start(hollow)).toThrow(/layer of -\d+\.?\d* m at column \d+, row \d+; it must be thicker/);
  });
});

describe('a nonlinear run that cannot go on', () => {
  const outcropping = nonlinear({
    layer: { ...thinLayer, restThicknessM: 40 },
    wind: uniform(-0.15),
    length: { days: 60 },
  });

  it('stops where the layer reaches its minimum unprotected, at the same step however it is cut', () => {
    const run = Integration.start(outcropping);
    const report = failureOf(() => run.advance(720));
    expect(report.cause).toBe('outcropping');
    expect(report.message).toMatch(/minimum thickness of 20 m in step \d+ .*Turn entrainment on/);
    const replay = Integration.start(outcropping);
    const exact = failureOf(() => replay.advance(720, { checkEvery: 1 }));
    expect([exact.cause, exact.step, replay.step]).toEqual(['outcropping', report.step, report.step]);
    const { cell } = exact;
    expect(cell).not.toBeNull();
    if (!cell) return;
    // The named cell is the thinnest, and water.
    const eta = replay.fields().eta;
    const thinnest = Math.min(...eta.filter((_, k) => replay.grid.mask[k]));
    expect(eta[cell.j * 40 + cell.i]).toBe(thinnest);
    expect(thinnest + 40).toBeLessThan(21);
    expect([cell.longitudeDeg, cell.latitudeDeg]).toEqual([
      replay.grid.lonCentre[cell.i],
      replay.grid.latCentre[cell.j],
    ]);
  });

  it('goes on when entrainment protects it, and counts the cells that it held up', () => {
    const run = Integration.start({
      ...outcropping,
      layer: { ...thinLayer, entrainment },
      wind: { ...uniform(-0.05), stressFloorM: 40 },
      friction: { ...base.friction, viscosityM2S: 10_000 },
      numerics: { ...outcropping.numerics, stepsPerDay: 24 },
      length: { days: 20 },
    });
    run.advance(run.totalSteps);
    const values = run.takeBudget();
    const names = run.budgetColumns().map(({ name }) => name);
    expect(values[names.indexOf('massEntrainment')]).toBeGreaterThan(0);
    expect(names).toContain('limitedCells');
    expect(run.frame().eta.every((eta) => Number.isNaN(eta) || eta + 60 >= 20 - 1e-5)).toBe(true);
  });

  it('is cautioned at S(1 + 2Fr) = 0.8 and stops at 0.91, with place and remedy', () => {
    // S = 0.45 at rest; a wind round the globe speeds the equator up by 0.056 m/s a day.
    const hasty = nonlinear({
      basin: { ...base.basin, zonallyPeriodic: true, islands: [] },
      layer: { ...base.layer, restThicknessM: 90 },
      wind: { ...uniform(0.06), stressFloorM: 40 },
      output: { ...base.output, moorings: [] },
      numerics: { ...base.numerics, equations: 'nonlinear', stepsPerDay: 8 },
      length: { days: 60 },
    });
    const run = Integration.start(hasty);
    const report = failureOf(() => run.advance(480));
    expect(report.cause).toBe('step limit');
    expect(report.step).toBe(-1);
    expect(report.message).toMatch(
      /S\(1 \+ 2Fr\) = (0\.9|1\.)\d* after step \d+ .* Use at least (12|16|20) steps a day/,
    );
    expect(run.cautions()).toHaveLength(1);
    const [caution] = run.cautions();
    expect(caution.value).toBeGreaterThan(0.8);
    expect(caution.step % 20).toBe(0);
    expect(caution.message).toMatch(/reached 0\.\d+ with a flow of .* m\/s at/);
    const replay = Integration.start(hasty);
    const exact = failureOf(() => {
      while (true) replay.advance(1, { checkEvery: 1 });
    });
    expect([exact.cause, exact.step]).toEqual(['step limit', replay.step]);
    expect(run.step - exact.step).toBeGreaterThanOrEqual(0);
    expect(run.step - exact.step).toBeLessThan(20);
    // Cautions outlive a checkpoint, and do not depend on how the run is cut.
    const again = Integration.start(hasty);
    for (let n = 0; n < caution.step + 3; n += 7) again.advance(7);
    const restored = Integration.restore(hasty, again.checkpoint());
    expect(restored.cautions()).toEqual(again.cautions());
    expect(restored.cautions()[0].step).toBe(caution.step);
  });
});
