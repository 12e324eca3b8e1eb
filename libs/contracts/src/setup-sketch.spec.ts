import fc from 'fast-check';
import { expect, it, vi } from 'vitest';
import { Integration, preflight, sketchSetup, SKETCH_WORK, type Setup, type Sketch } from '@halfdeep/ocean';
import { setupSchema } from './setup-schema';
import { anySetup } from './testing/any-setup';

vi.setConfig({ testTimeout: 240_000 });

/** The sketch, or the sentence that says why there is none. */
function sketchOf(setup: Setup): Sketch | string {
  try {
    return sketchSetup(setup);
  } catch (error) {
    if (!(error instanceof RangeError)) throw error;
    return error.message;
  }
}

it('makes of any setup a sketch that passes schema and preflight and fits the work, or says why there is none', () => {
  let made = 0;
  fc.assert(
    fc.property(anySetup(), (setup) => {
      const before = structuredClone(setup);
      const sketch = sketchOf(setup);
      expect(setup).toEqual(before);
      if (typeof sketch === 'string') {
        expect(sketch).toMatch(/^No sketch of this setup can be .*\.$/);
        return;
      }
      made++;
      expect(setupSchema.safeParse(sketch.setup).error?.issues ?? []).toEqual([]);
      const { verdict, cost } = preflight(sketch.setup);
      expect(verdict).not.toBe('refuse');
      expect(cost.cells * cost.steps).toBeLessThanOrEqual(SKETCH_WORK[setup.numerics.equations] * (1 + 1e-9));
      expect(sketch.setup.length.days).toBeLessThanOrEqual(setup.length.days);
      for (const note of sketch.notes) expect(note).not.toMatch(/NaN|undefined|null|Infinity|infinite|no number/);
    }),
    { numRuns: 120 },
  );
  expect(made).toBeGreaterThan(12);
});

it('can be integrated whenever it is made', () => {
  fc.assert(
    fc.property(anySetup(60), (setup) => {
      const sketch = sketchOf(setup);
      if (typeof sketch === 'string') return;
      const run = Integration.start(sketch.setup);
      expect(run.totalSteps).toBe(Math.round(sketch.setup.length.days * sketch.setup.numerics.stepsPerDay));
      run.advance(Math.min(2, run.totalSteps));
    }),
    { numRuns: 25 },
  );
});
