import { describe, expect, it } from 'vitest';
import { Integration, type Setup } from '@halfdeep/ocean';
import { smallSetup } from '../../libs/ocean/src/testing/setups';

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

describe('restart and output', () => {
  it.each(setups)('goes on to the same bits from a checkpoint at any moment: %s', (_name, setup) => {
    const whole = Integration.start(setup);
    const records = deliver(whole, 12);
    for (const stop of [0, 1, 2, 12, 101, 239]) {
      const first = Integration.start(setup);
      const early: Float64Array[] = [];
      for (let n = 0; n < stop; n++) {
        first.advance(1);
        if (first.step % 12 === 0) early.push(first.takeSections(), first.takeBudget(), first.takeMoorings());
      }
      // Twice over: a checkpoint of a restored run is the checkpoint itself.
      const bytes = first.checkpoint();
      expect(Integration.restore(setup, bytes).checkpoint()).toEqual(bytes);
      const second = Integration.restore(setup, bytes);
      expect(second.step).toBe(stop);
      const late = deliver(second, 12);
      expect([...early, ...late]).toEqual(records);
      expect(second.fingerprint()).toEqual(whole.fingerprint());
      expect(second.checkpoint()).toEqual(whole.checkpoint());
    }
  });

  it.each(setups)('ends in the same bits whatever is recorded and however it is cut: %s', (_name, setup) => {
    const reference = Integration.start(setup);
    reference.advance(reference.totalSteps);
    for (const every of [3, 7, 60]) {
      const other = Integration.start({
        ...setup,
        output: { ...setup.output, sections: [], moorings: [], frameIntervalDays: 0.25 },
      });
      deliver(other, every);
      expect(other.fingerprint()).toEqual(reference.fingerprint());
    }
    const checked = Integration.start(setup);
    checked.advance(checked.totalSteps, { checkEvery: 1 });
    expect(checked.fingerprint()).toEqual(reference.fingerprint());
  });

  it('an extension from the last state equals one long run, records too', () => {
    const long = Integration.start(smallSetup({ length: { days: 20 } }));
    const records = deliver(long, 12);
    const parent = Integration.start(smallSetup({ length: { days: 10 } }));
    const early = deliver(parent, 12);
    const child = Integration.start(...extensionOf(parent, 10));
    expect([child.startStep, child.totalSteps, child.day]).toEqual([120, 240, 10]);
    const late = deliver(child, 12);
    expect([...early, ...late]).toEqual(records);
    expect(child.fingerprint()).toEqual(long.fingerprint());
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
