import { describe, expect, it } from 'vitest';
import { Integration, type Setup } from '@halfdeep/ocean';
import { smallSetup } from '../../libs/ocean/src/testing/setups';
import { proveCase } from './record';

// Case v. Restart and output intervals: identical bits.
const base = smallSetup();
const setups: [string, Setup][] = [
  ['closed basin', base],
  [
    'periodic, damped, no slip',
    smallSetup({
      basin: { ...base.basin, zonallyPeriodic: true },
      layer: { ...base.layer, dampingPerS: 1e-7 },
      friction: { ...base.friction, slip: 'none' },
    }),
  ],
  [
    'nonlinear, entrainment, limiter, sponge',
    smallSetup({
      basin: { ...base.basin, sponges: [{ edge: 'east', widthDeg: 3, peakRatePerS: null, tapersWind: true }] },
      layer: {
        ...base.layer,
        minimumThicknessM: 190,
        entrainment: { onsetThicknessM: 198, timescaleDays: 10, detrainment: 'uniform' },
      },
      // The steps of a run of ten days at twelve a day are what the stops below are made for.
      numerics: { ...base.numerics, equations: 'nonlinear' },
    }),
  ],
];

/** Everything that a run delivers when its records are taken every so many steps. */
function deliver(run: Integration, every: number): Float64Array[] {
  const records: Float64Array[] = [];
  while (run.step < run.totalSteps) {
    run.advance(Math.min(every - ((run.step - run.startStep) % every), run.totalSteps - run.step));
    if ((run.step - run.startStep) % every === 0)
      records.push(run.takeSections(), run.takeBudget(), run.takeMoorings());
  }
  return records;
}

function stateOf(run: Integration): Float64Array[] {
  const { eta, u, v } = run.fields();
  return [eta, u, v];
}

/** How many numbers are not the same bits; all of them when there are more or fewer. */
function differing(found: readonly Float64Array[], expected: readonly Float64Array[]): number {
  const [a, b] = [found, expected].map((list) => list.flatMap((values) => [...values]));
  if (a.length !== b.length) return Math.max(a.length, b.length);
  return a.filter((value, k) => !Object.is(value, b[k])).length;
}

describe('restart and output', () => {
  for (const [name, setup] of setups) {
    it(`goes on to the same bits from a checkpoint at any moment: ${name}`, (context) => {
      const whole = Integration.start(setup);
      const records = deliver(whole, 12);
      let different = 0;
      for (const stop of [0, 1, 2, 12, 101, 239]) {
        const first = Integration.start(setup);
        const early: Float64Array[] = [];
        for (let n = 0; n < stop; n++) {
          first.advance(1);
          if (first.step % 12 === 0) early.push(first.takeSections(), first.takeBudget(), first.takeMoorings());
        }
        // Twice over: a checkpoint of a restored run is the checkpoint itself.
        const bytes = first.checkpoint();
        expect(Buffer.compare(Integration.restore(setup, bytes).checkpoint(), bytes)).toBe(0);
        const second = Integration.restore(setup, bytes);
        expect(second.step).toBe(stop);
        const late = deliver(second, 12);
        different += differing([...early, ...late], records) + differing(stateOf(second), stateOf(whole));
        expect(second.fingerprint()).toEqual(whole.fingerprint());
        expect(Buffer.compare(second.checkpoint(), whole.checkpoint())).toBe(0);
      }
      proveCase(context, 'v', {
        id: `restart (${name})`,
        quantity: `numbers of state and records that differ after a restart at steps 0, 1, 2, 12, 101, 239; ${name}`,
        expected: 0,
        obtained: different,
        kind: 'absolute',
        tolerance: 0,
        resolution: '240 steps',
      });
    });

    it(`ends in the same bits whatever is recorded and however it is cut: ${name}`, (context) => {
      const reference = Integration.start(setup);
      reference.advance(reference.totalSteps);
      let different = 0;
      for (const every of [3, 7, 60]) {
        const other = Integration.start({
          ...setup,
          output: { ...setup.output, sections: [], moorings: [], frameIntervalDays: 0.25 },
        });
        deliver(other, every);
        different += differing(stateOf(other), stateOf(reference));
        expect(other.fingerprint()).toEqual(reference.fingerprint());
      }
      const checked = Integration.start(setup);
      checked.advance(checked.totalSteps, { checkEvery: 1 });
      different += differing(stateOf(checked), stateOf(reference));
      expect(checked.fingerprint()).toEqual(reference.fingerprint());
      proveCase(context, 'v', {
        id: `output (${name})`,
        quantity: `numbers of the state that differ when records are taken every 3, 7, 60 steps or none; ${name}`,
        expected: 0,
        obtained: different,
        kind: 'absolute',
        tolerance: 0,
        resolution: '240 steps',
      });
    });
  }

  it('an extension from the last state equals one long run, records too', (context) => {
    const long = Integration.start(smallSetup({ length: { days: 20 } }));
    const records = deliver(long, 12);
    const parent = Integration.start(smallSetup({ length: { days: 10 } }));
    const early = deliver(parent, 12);
    const child = Integration.start(...extensionOf(parent, 10));
    expect([child.startStep, child.totalSteps, child.day]).toEqual([120, 240, 10]);
    const late = deliver(child, 12);
    expect(child.fingerprint()).toEqual(long.fingerprint());
    proveCase(context, 'v', {
      id: 'extension',
      quantity: 'numbers of state and records that differ between ten days extended by ten and twenty at once',
      expected: 0,
      obtained: differing([...early, ...late], records) + differing(stateOf(child), stateOf(long)),
      kind: 'absolute',
      tolerance: 0,
      resolution: '240 steps',
    });
  });

  it('would not, had the two older levels been lost: they matter', () => {
    const long = Integration.start(smallSetup({ length: { days: 20 } }));
    long.advance(240);
    // Another step rebuilds the history by copies: 12 steps a day then 24, against 24 from the start of the second half.
    const parent = Integration.start(smallSetup({ length: { days: 10 } }));
    parent.advance(120);
    const [setup, state] = extensionOf(parent, 10);
    const numerics = { ...setup.numerics, stepsPerDay: 24 };
    const child = Integration.start({ ...setup, numerics }, state);
    expect([child.startStep, child.totalSteps, child.day]).toEqual([240, 480, 10]);
    child.advance(240);
    expect(child.fingerprint().sha256).not.toBe(long.fingerprint().sha256);
    // Close, all the same: the break is one local error of order dt².
    const [a, b] = [child.frame().eta, long.frame().eta];
    const largest = a.reduce((most, eta, k) => (Number.isNaN(eta) ? most : Math.max(most, Math.abs(eta - b[k]))), 0);
    expect(largest).toBeGreaterThan(0);
    expect(largest).toBeLessThan(0.1);
  });
});

/** Setup and state of an extension by so many days. */
function extensionOf(parent: Integration, days: number): [Setup, Uint8Array] {
  const state = parent.lastState();
  return [
    {
      ...parent.setup,
      length: { days },
      start: {
        kind: 'state',
        runId: '00000000-0000-4000-8000-000000000001',
        fingerprint: parent.fingerprint().sha256,
        stateSha256: Integration.stateSha256(state),
        startStep: parent.step,
        stepsPerDay: parent.setup.numerics.stepsPerDay,
      },
    },
    state,
  ];
}
