import fc from 'fast-check';
import { describe, expect, it, vi } from 'vitest';
import {
  applyRemedy,
  buildGrid,
  describeSetup,
  diffSetups,
  fieldLabel,
  Integration,
  LIMITS,
  preflight,
  windDiagram,
  type PreflightContext,
  type Setup,
} from '@halfdeep/ocean';
import { setupSchema } from './setup-schema';
import { anySetup } from './testing/any-setup';

// Hundreds of setups each: generous, since the machine may be busy.
vi.setConfig({ testTimeout: 240_000 });

const RANK = { refuse: 0, caution: 1, pass: 2 };
const contexts: fc.Arbitrary<PreflightContext> = fc.record(
  {
    cellStepsPerSecond: fc.double({ min: 1e3, max: 1e10, noNaN: true }),
    freeDiskBytes: fc.double({ min: 0, max: 1e13, noNaN: true }),
    quotaBytes: fc.double({ min: 0, max: 1e13, noNaN: true }),
  },
  { requiredKeys: [] },
);

/** Paths of all numbers in a value that are not finite. */
function notFinite(value: unknown, path = ''): string[] {
  if (typeof value === 'number') return Number.isFinite(value) ? [] : [path];
  if (typeof value !== 'object' || value === null) return [];
  return Object.entries(value).flatMap(([key, child]) => notFinite(child, `${path}/${key}`));
}

function resolves(setup: Setup, pointer: string): boolean {
  let at: unknown = setup;
  for (const key of pointer.split('/').slice(1)) {
    if (typeof at !== 'object' || at === null || !Object.hasOwn(at, key)) return false;
    at = (at as Record<string, unknown>)[key];
  }
  return true;
}

const refused = (setup: Setup, context: PreflightContext) =>
  preflight(setup, context)
    .checks.filter(({ verdict }) => verdict === 'refuse')
    .map(({ id }) => id);

describe('preflight of any setup that the schema accepts', () => {
  it('gives finite numbers, one verdict that fits its rows, rows in order, and pointers into the setup', () => {
    fc.assert(
      fc.property(anySetup(), contexts, (setup, context) => {
        const before = structuredClone(setup);
        const result = preflight(setup, context);
        expect(setup).toEqual(before);
        expect(notFinite(result)).toEqual([]);
        expect(JSON.parse(JSON.stringify(result))).toEqual(result);
        const ranks = result.checks.map(({ verdict }) => RANK[verdict]);
        expect(RANK[result.verdict]).toBe(Math.min(2, ...ranks));
        expect(ranks).toEqual([...ranks].sort());
        const passes = result.checks.filter(({ verdict }) => verdict === 'pass').map(({ ratio }) => ratio);
        expect(passes).toEqual([...passes].sort((a, b) => b - a));
        expect(new Set(result.checks.map(({ id }) => id)).size).toBe(result.checks.length);
        for (const { verdict, ratio, reason, pointers, remedy, label } of result.checks) {
          expect(ratio).toBeGreaterThanOrEqual(0);
          expect(verdict === 'pass').toBe(ratio <= 1);
          expect(reason).toMatch(/^\S.*\.$/);
          expect(reason).not.toMatch(/NaN|undefined|infinite|no number/);
          expect(label).not.toBe('');
          expect(pointers.filter((pointer) => !resolves(setup, pointer))).toEqual([]);
          expect(pointers.map((pointer) => fieldLabel(pointer, setup))).not.toContain('Setup');
          if (verdict === 'pass') expect(remedy).toBeNull();
        }
        expect(result.proposedStepsPerDay % 4).toBe(0);
      }),
      { numRuns: 200 },
    );
  });

  it('offers only remedies that cure: valid, better for their row, and refusing nothing new', () => {
    let applied = 0;
    fc.assert(
      fc.property(anySetup(), contexts, (setup, context) => {
        const { checks } = preflight(setup, context);
        const before = new Set(refused(setup, context));
        for (const { id, verdict, remedy } of checks) {
          if (!remedy) continue;
          applied++;
          const cured = applyRemedy(setup, remedy);
          const parsed = setupSchema.safeParse(cured);
          expect(parsed.success ? [] : parsed.error.issues).toEqual([]);
          const now = preflight(cured, context).checks.find((check) => check.id === id)?.verdict ?? 'pass';
          expect(RANK[now]).toBeGreaterThan(RANK[verdict]);
          const after = refused(cured, context);
          expect(after.filter((one) => !before.has(one))).toEqual([]);
          if (verdict === 'refuse') expect(after.length).toBeLessThan(before.size);
          expect(diffSetups(setup, cured).length).toBeGreaterThan(0);
        }
      }),
      { numRuns: 40 },
    );
    expect(applied).toBeGreaterThan(100);
  });

  it('refuses what the core would not build, and lets the core start what it does not refuse', () => {
    let started = 0;
    let unbuilt = 0;
    fc.assert(
      fc.property(anySetup(40), (setup) => {
        const result = preflight(setup);
        const ids = refused(setup, {});
        if (result.cost.cells > 20_000 && result.cost.cells <= LIMITS.cells.max) return;
        const beyond = ids.filter((id) => ['cells', 'spacing', 'water', 'coast-cells'].includes(id));
        if (beyond.length > 0) {
          unbuilt++;
          expect(() => buildGrid(setup)).toThrow(RangeError);
          return;
        }
        const grid = buildGrid(setup);
        expect([grid.nx, grid.ny, grid.wetCells]).toEqual([result.grid.nx, result.grid.ny, result.cost.wetCells]);
        expect(grid.notes).toEqual(result.notes);
        if (result.verdict === 'refuse' || setup.start.kind === 'state') return;
        started++;
        const run = Integration.start(setup);
        run.advance(Math.min(8, run.totalSteps));
        expect(run.frame().eta.some((value) => value === Infinity)).toBe(false);
      }),
      { numRuns: 200 },
    );
    expect(started).toBeGreaterThan(10);
    expect(unbuilt).toBeGreaterThan(10);
  });
});

describe('words of any setup', () => {
  it('finds no difference of a setup from itself, and one exactly where two differ', () => {
    fc.assert(
      fc.property(anySetup(), anySetup(), (a, b) => {
        expect(diffSetups(a, structuredClone(a))).toEqual([]);
        const changes = diffSetups(a, b);
        expect(changes.length === 0).toBe(JSON.stringify(a) === JSON.stringify(b));
        for (const { from, to, pointer, label } of changes) {
          expect(from).not.toBe(to);
          expect(label).toMatch(/\S/);
          expect(resolves(b, pointer)).toBe(true);
        }
      }),
      { numRuns: 200 },
    );
  });
  it('describes it and draws its wind', () => {
    fc.assert(
      fc.property(anySetup(), (setup) => {
        for (const text of Object.values(describeSetup(setup))) expect(text).toMatch(/^\S[^]*\S$/);
        const { shape, taux, pumping, latDeg } = windDiagram(setup, { rows: 12, columns: 12 });
        expect(taux).toHaveLength(shape[0] * shape[1]);
        expect(latDeg).toHaveLength(shape[0]);
        expect(taux.every(Number.isFinite)).toBe(true);
        expect(pumping.some((value) => Math.abs(value) === Infinity)).toBe(false);
      }),
      { numRuns: 200 },
    );
  });
});
