// eslint-disable-next-line no-restricted-imports -- a second SHA-256, to check the library's against
import { createHash } from 'node:crypto';
import { describe, expect, it } from 'vitest';
import { sha256Hex } from '../exact/bytes';
import { exp } from '../exact/elementary';
import { windForcing } from '../forcing/forcing';
import { buildGrid } from '../grid/build-grid';
import type { Setup } from '../setup';
import { viewOf } from '../stepper/fields';
import { createModel, setState } from '../stepper/model';
import { stepModel } from '../stepper/stepper';
import { smallSetup } from '../testing/setups';
import { unpack } from './container';
import { IntegrationFailure } from './failure';
import { Integration } from './integration';
import { recordSteps, stepRange } from './schedule';

const setup = smallSetup();

function spunUp(steps = 60, of: Setup = setup): Integration {
  const run = Integration.start(of);
  run.advance(steps);
  return run;
}

/** The setup of a run that goes on from `parent`. */
function childOf(parent: Integration, state: Uint8Array, change: Partial<Setup> = {}): Setup {
  return {
    ...parent.setup,
    start: {
      kind: 'state',
      runId: '00000000-0000-4000-8000-000000000001',
      fingerprint: parent.fingerprint().sha256,
      stateSha256: Integration.stateSha256(state),
      startStep: parent.step,
      stepsPerDay: parent.setup.numerics.stepsPerDay,
    },
    ...change,
  };
}

describe('schedule', () => {
  it('counts intervals in steps and days from the start', () => {
    expect(recordSteps(setup)).toEqual({ frames: 60, sections: 12, moorings: 3, budget: 12 });
    expect(stepRange(setup)).toEqual({ startStep: 0, totalSteps: 240 });
    const run = spunUp(7);
    expect([run.step, run.day, run.startStep, run.totalSteps]).toEqual([7, 7 / 12, 0, 240]);
  });
  it('refuses parts of steps', () => {
    const numerics = { ...setup.numerics, stepsPerDay: 10 };
    expect(() => recordSteps({ ...setup, numerics })).toThrow(/mooring interval .* 0.25 d at 10 steps a day are 2.5/);
    expect(() => stepRange({ ...setup, length: { days: 0.3 } })).toThrow(/0.3 d arrived/);
    expect(() => stepRange({ ...setup, numerics: { ...numerics, stepsPerDay: 0 } })).toThrow(/whole number; 0 arrived/);
  });
  it('refuses to go beyond the end, and backwards', () => {
    const run = spunUp(239);
    expect(() => run.advance(2)).toThrow(/ends at step 240 and stands at 239.* up to 1; 2 arrived/);
    expect(() => run.advance(-1)).toThrow(RangeError);
    expect(() => run.advance(1, { checkEvery: 0 })).toThrow(/from 1 to 20; 0 arrived/);
    run.advance(1);
    expect(run.step).toBe(240);
  });
});

describe('the model of a run', () => {
  it('has every number of its setup: it steps like a model made by hand', () => {
    const of = smallSetup({
      constants: { ...setup.constants, densityKgM3: 1030 },
      layer: { ...setup.layer, reducedGravityMS2: 0.025, restThicknessM: 180, dampingPerS: 3e-7 },
      friction: { rayleighPerS: 4e-7, viscosityM2S: 2500, viscosityPatches: [], slip: 'none' },
      start: {
        kind: 'bump',
        amplitudeM: 6,
        longitudeDeg: 9,
        latitudeDeg: 1,
        widthLongitudeDeg: 2,
        widthLatitudeDeg: 3,
      },
    });
    const run = spunUp(60, of);
    const grid = buildGrid(of);
    const byHand = createModel({
      grid,
      dt: 7200,
      reducedGravity: 0.025,
      restThickness: 180,
      density: 1030,
      rayleigh: 4e-7,
      viscosity: 2500,
      damping: 3e-7,
      slip: 'none',
      forcing: windForcing(of, grid),
    });
    const bell = (x: number, centre: number, width: number) => -0.5 * ((x - centre) / width) ** 2;
    setState(byHand, {
      eta: (i, j) => 6 * exp(bell(grid.lonCentre[i], 9, 2)) * exp(bell(grid.latCentre[j], 1, 3)),
    });
    for (let n = 0; n < 60; n++) stepModel(byHand);
    for (const variable of ['eta', 'u', 'v'] as const) {
      const expected = viewOf(byHand, variable === 'eta' ? 'h' : variable);
      const [rows, columns] = expected.shape;
      const values = Array.from({ length: rows * columns }, (_, k) =>
        expected.get(Math.floor(k / columns), k % columns),
      );
      const size = Math.max(...values.map(Math.abs));
      expect(size).toBeGreaterThan(0);
      run.fields()[variable].forEach((value, k) => expect(Math.abs(value - values[k])).toBeLessThan(1e-13 * size));
    }
  });
});

describe('frames and series', () => {
  it('a frame has land NaN, coasts 0 and float32 values of the fields', () => {
    const run = spunUp();
    const frame = run.frame();
    const fields = run.fields();
    expect([frame.step, frame.day]).toEqual([60, 5]);
    expect([frame.eta.length, frame.u.length, frame.v.length]).toEqual([40 * 32, 41 * 32, 40 * 33]);
    frame.eta.forEach((eta, k) =>
      expect(Object.is(eta, run.grid.mask[k] ? Math.fround(fields.eta[k]) : NaN)).toBe(true),
    );
    for (let j = 0; j < 32; j++) expect([frame.u[j * 41], frame.u[j * 41 + 40]]).toEqual([0, 0]);
    for (let i = 0; i < 40; i++) expect([frame.v[i], frame.v[32 * 40 + i]]).toEqual([0, 0]);
    // The island's west coast is a face with water on one side; between two of its cells there is none.
    expect(frame.u[10 * 41 + 24]).toBe(0);
    expect(frame.u[10 * 41 + 25]).toBeNaN();
  });
  it('moorings are instants of the cell that holds them', () => {
    const run = spunUp();
    const { eta, u, v } = run.fields();
    const [i, j] = [36, 16]; // 18.3° E, 0.2° N
    expect(run.mooringColumns().map(({ name }) => name)).toEqual(['0.eta', '0.uCentre', '0.vCentre']);
    expect([...run.takeMoorings()]).toEqual([
      eta[j * 40 + i],
      0.5 * (u[j * 41 + i] + u[j * 41 + i + 1]),
      0.5 * (v[j * 40 + i] + v[(j + 1) * 40 + i]),
    ]);
  });
  it('sections give transports, heat and the volume north, by name and unit', () => {
    const run = spunUp();
    const columns = run.sectionColumns();
    expect(columns.map(({ name, unit, kind }) => [name, unit, kind])).toEqual([
      ['0.transport', 'Sv', 'mean'],
      ['0.transportNow', 'Sv', 'instant'],
      ['0.heat', 'PW', 'mean'],
      ['0.volumeNorth', 'km³', 'instant'],
      ['1.transport', 'Sv', 'mean'],
      ['1.transportNow', 'Sv', 'instant'],
      ['1.heat', 'PW', 'mean'],
    ]);
    const { eta, u, v } = run.fields();
    const [mean, now, heat, north, , eastward] = run.takeSections();
    const { dxV, dy } = run.grid;
    const row = v.slice(16 * 40, 17 * 40).reduce((sum, value) => sum + value, 0);
    expect(now).toBeCloseTo((row * dxV[16] * 200) / 1e6, 12);
    expect(heat).toBeCloseTo((mean * 1e6 * 4.1e6 * 15) / 1e15, 15); // 1 Sv × 15 K = 0.0615 PW
    const volume = eta.slice(16 * 40).reduce((sum, value) => sum + value, 0) * dxV[16] * dy;
    expect(north / (volume / 1e9)).toBeCloseTo(1, 12);
    let column = 0;
    for (let j = 0; j < 32; j++) column += u[j * 41 + 20];
    expect(eastward).toBeCloseTo((column * dy * 200) / 1e6, 12);
    // A new interval begins: nothing has been added up yet.
    expect(run.takeSections()[0]).toBeNaN();
  });
  it('sections add up the fluxes that change η, not the velocities at either end of a step', () => {
    const run = spunUp(57);
    const columns = run.sectionColumns().map(({ name }) => name);
    const levels = [run.fields()];
    for (let n = 0; n < 2; n++) {
      run.advance(1);
      levels.unshift(run.fields());
    }
    run.takeSections();
    run.advance(1);
    const record = run.takeSections();
    const weights = [1.781105, -1.06221, 0.281105]; // n, n − 1, n − 2 (numerics.md §4)
    const flux = (variable: 'u' | 'v', points: number[]) =>
      points.reduce((sum, k) => sum + levels.reduce((half, of, n) => half + weights[n] * of[variable][k], 0), 0);
    const { dxV, dy } = run.grid;
    const row = Array.from({ length: 40 }, (_, i) => 16 * 40 + i);
    const column = Array.from({ length: 32 }, (_, j) => j * 41 + 20);
    const [northward, eastward] = [(flux('v', row) * dxV[16] * 200) / 1e6, (flux('u', column) * dy * 200) / 1e6];
    expect(record[columns.indexOf('0.transport')] / northward).toBeCloseTo(1, 10);
    expect(record[columns.indexOf('1.transport')] / eastward).toBeCloseTo(1, 10);
    for (const k of [0, 1]) {
      const [mean, now] = ['transport', 'transportNow'].map((name) => record[columns.indexOf(`${k}.${name}`)]);
      expect(Math.abs(mean / now - 1)).toBeGreaterThan(1e-6);
    }
  });
  it('a damped layer names the damping in sections too', () => {
    const run = spunUp(12, smallSetup({ layer: { ...setup.layer, dampingPerS: 1e-7 } }));
    expect(run.sectionColumns().map(({ name }) => name)).toContain('0.dampingNorth');
    expect(run.takeSections()).toHaveLength(run.sectionColumns().length);
    expect(run.takeBudget()).toHaveLength(run.budgetColumns().length);
  });
  it('refuses sections and moorings off the water, by name', () => {
    const output = (change: Partial<Setup['output']>) => smallSetup({ output: { ...setup.output, ...change } });
    const start = (of: Setup) => () => Integration.start(of);
    expect(start(output({ sections: [{ name: 'Far', along: 'latitude', atDeg: 9 }] }))).toThrow(
      /section “Far” at 9° lies outside the basin, which reaches from -8° to 8°/,
    );
    expect(start(output({ moorings: [{ name: 'Dry', longitudeDeg: 13, latitudeDeg: -3 }] }))).toThrow(
      /mooring “Dry” at 13° E, -3° N lies on land/,
    );
    expect(start(output({ moorings: [{ name: 'Off', longitudeDeg: 25, latitudeDeg: 0 }] }))).toThrow(
      /outside the basin/,
    );
    const onEdges = [
      { name: 'NE', longitudeDeg: 20, latitudeDeg: 8 },
      { name: 'SW', longitudeDeg: 0, latitudeDeg: -8 },
    ];
    expect(spunUp(1, output({ moorings: onEdges })).takeMoorings()).toHaveLength(6);
  });
});

describe('fingerprint', () => {
  it.each([0, 60])('is SHA-256 over six uint32, then u, v and η, little-endian, −0 as +0: step %i', (steps) => {
    // A narrow hollow: its flanks underflow to −0 at first.
    const bump = {
      kind: 'bump',
      longitudeDeg: 5,
      latitudeDeg: 1,
      widthLongitudeDeg: 0.2,
      widthLatitudeDeg: 0.2,
    } as const;
    const run = spunUp(steps, smallSetup({ start: { ...bump, amplitudeM: -5 } }));
    const { eta, u, v } = run.fields();
    if (steps === 0) expect(eta.some((value) => Object.is(value, -0))).toBe(true);
    const hash = createHash('sha256').update(Buffer.from(Uint32Array.of(32, 41, 33, 40, 32, 40).buffer));
    for (const field of [u, v, eta]) hash.update(Buffer.from(field.map((value) => (value === 0 ? 0 : value)).buffer));
    expect(run.fingerprint()).toEqual({
      sha256: hash.digest('hex'),
      coreVersion: '2',
      shape: [32, 41, 33, 40, 32, 40],
    });
    run.advance(1);
    expect(run.fingerprint().sha256).not.toBe(spunUp(60).fingerprint().sha256);
  });
});

describe('checkpoints', () => {
  it('are refused when damaged, of another kind, setup or core', () => {
    const run = spunUp();
    const bytes = run.checkpoint();
    for (const k of [0, 9, 40, bytes.length >> 1, bytes.length - 1]) {
      const bad = bytes.slice();
      bad[k] ^= 4;
      expect(() => Integration.restore(setup, bad), `byte ${k}`).toThrow(/HALFDEEP|layout|damaged/);
    }
    expect(() => Integration.restore(setup, bytes.slice(0, -8))).toThrow(/damaged/);
    expect(() => Integration.restore(setup, run.lastState())).toThrow(/A checkpoint is needed; a state arrived/);
    const other = smallSetup({ friction: { ...setup.friction, rayleighPerS: 2e-7 } });
    expect(() => Integration.restore(other, bytes)).toThrow(/another setup/);
  });
  it('take the same setup with its keys in another order, and bytes in a Buffer', () => {
    const run = spunUp();
    const { numerics, ...rest } = setup;
    const reordered = { numerics: Object.fromEntries(Object.entries(numerics).reverse()), ...rest } as unknown as Setup;
    const restored = Integration.restore(reordered, Buffer.from(run.checkpoint()));
    restored.advance(10);
    run.advance(10);
    expect(restored.fingerprint()).toEqual(run.fingerprint());
  });
});

describe('starts from a state', () => {
  const parent = spunUp(120);
  const state = parent.lastState();

  it('is named by its hash', () => {
    expect(Integration.stateSha256(state)).toBe(createHash('sha256').update(state).digest('hex'));
    expect(sha256Hex(state)).toBe(Integration.stateSha256(state));
  });
  it('keeps the model time and the thickness when H differs', () => {
    const layer = { ...setup.layer, restThicknessM: 210 };
    const child = Integration.start(childOf(parent, state, { layer }), state);
    expect([child.startStep, child.step, child.day, child.totalSteps]).toEqual([120, 120, 10, 360]);
    const [before, after] = [parent.fields().eta, child.fields().eta];
    child.grid.mask.forEach((wet, k) => expect(after[k]).toBe(wet ? before[k] - 10 : 0));
  });
  it('counts the start in its own steps when the step differs', () => {
    const numerics = { ...setup.numerics, stepsPerDay: 20 };
    const child = Integration.start(childOf(parent, state, { numerics }), state);
    expect([child.startStep, child.totalSteps, child.day]).toEqual([200, 600, 10]);
    expect(child.fields()).toEqual(parent.fields());
    // Levels a parent's step apart are no history of the child: both are copies of the present one.
    const { arrays } = unpack(child.lastState(), 'state');
    for (const name of ['eta', 'u', 'v'])
      for (const level of ['previous', 'before']) expect(arrays[`${name} ${level}`]).toEqual(arrays[name]);
    expect(unpack(state, 'state').arrays['u previous']).not.toEqual(arrays['u']);
    const odd = { ...setup.numerics, stepsPerDay: 4 };
    const parentOdd = spunUp(121);
    const oddState = parentOdd.lastState();
    expect(() => Integration.start(childOf(parentOdd, oddState, { numerics: odd }), oddState)).toThrow(
      /step 121 of 12 a day, which is no whole number of steps at 4 a day/,
    );
  });
  it('is refused on another grid, when missing, damaged or another one', () => {
    const child = childOf(parent, state);
    const finer = { ...setup.numerics, spacingLongitudeDeg: 0.4 };
    expect(() => Integration.start({ ...child, numerics: finer }, state)).toThrow(
      /another grid \(40 × 32 cells\) than this setup's \(50 × 32\)/,
    );
    expect(() => Integration.start({ ...child, basin: { ...child.basin, islands: [] } }, state)).toThrow(
      /another grid/,
    );
    expect(() => Integration.start(child)).toThrow(/is missing/);
    const other = spunUp(24).lastState();
    expect(() => Integration.start(child, other)).toThrow(/the state that arrived is/);
    expect(() => Integration.start(setup, state)).toThrow(/starts from “rest”/);
    const checkpoint = parent.checkpoint();
    expect(() => Integration.start(childOf(parent, checkpoint), checkpoint)).toThrow(/a checkpoint arrived/);
    const late = childOf(parent, state);
    if (late.start.kind === 'state') late.start.startStep = 132;
    expect(() => Integration.start(late, state)).toThrow(/starts at step 132 of 12 a day; the state lies at step 120/);
  });
});

describe('an integration that fails', () => {
  const unstable = smallSetup({ numerics: { ...setup.numerics, stepsPerDay: 4 }, length: { days: 400 } });
  const failureOf = (work: () => void): IntegrationFailure => {
    try {
      work();
    } catch (error) {
      if (error instanceof IntegrationFailure) return error;
      throw error;
    }
    throw new Error('It did not fail.');
  };
  it('stops within 20 steps, and names step, cell and cause when every step is checked', () => {
    const coarse = failureOf(() => spunUp(1600, unstable)).report;
    expect([coarse.cause, coarse.step, coarse.cell]).toEqual(['non-finite', -1, null]);
    const run = Integration.start(unstable);
    const { report } = failureOf(() => run.advance(1600, { checkEvery: 1 }));
    expect(report.step).toBe(run.step);
    expect(coarse.day * 4 - report.step).toBeGreaterThanOrEqual(0);
    expect(coarse.day * 4 - report.step).toBeLessThan(20);
    const { cell } = report;
    expect(cell).not.toBeNull();
    if (!cell) return;
    const width = cell.variable === 'u' ? 41 : 40;
    expect(Number.isFinite(run.fields()[cell.variable][cell.j * width + cell.i])).toBe(false);
    expect(report.message).toMatch(
      /is not finite after step \d+ .*too long: S = 1\.\d+ \(limit 0\.89\).*Use more steps a day/,
    );
    // The step before was whole.
    const before = Integration.start(unstable);
    before.advance(report.step - 1);
    expect(Object.values(before.fields()).every((field) => field.every((value) => Number.isFinite(value)))).toBe(true);
  });
});

describe('numbers that the equations cannot take', () => {
  it.each([
    [
      { layer: { ...setup.layer, reducedGravityMS2: -1 } },
      /Reduced gravity must be a positive finite number .*-1 arrived/,
    ],
    [{ layer: { ...setup.layer, restThicknessM: NaN } }, /Thickness at rest .* NaN arrived/],
    [{ friction: { ...setup.friction, viscosityM2S: -5 } }, /Viscosity must be 0 or a positive .* -5 arrived/],
    [{ friction: { ...setup.friction, rayleighPerS: Infinity } }, /Rayleigh drag .* Infinity arrived/],
    [{ layer: { ...setup.layer, dampingPerS: -1e-9 } }, /Interface damping/],
  ])('are refused by name (%#)', (change, message) => {
    expect(() => Integration.start(smallSetup(change as Partial<Setup>))).toThrow(message);
  });
});

it('keeps its bits: a change that alters them raises CORE_VERSION with this value', () => {
  // Computed by this core; it guards against a change of bits by accident.
  const { coreVersion, sha256 } = spunUp(240).fingerprint();
  expect([coreVersion, sha256]).toEqual(['2', 'e9414112c3ab7cf2602c5a7626c00537959075852d8a60fbc1dac830b1aac0ea']);
});
