import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { buildGrid, gridLayout } from '../grid/build-grid';
import { coastLongitude } from '../grid/land';
import { snapSection } from '../integration/sections';
import { diffSetups } from '../describe/diff-setups';
import { preflight } from '../preflight/preflight';
import { corvaneForCheck, smallSetup } from '../testing/setups';
import type { Basin, Setup } from '../setup';
import { refinedSetup } from './refined-setup';

const withBasin = (basin: Partial<Basin>, change: Partial<Setup> = {}): Setup => {
  const setup = smallSetup(change);
  return { ...setup, basin: { ...setup.basin, ...basin } };
};

const stepVerdicts = (setup: Setup) =>
  preflight(setup)
    .checks.filter(({ id }) => id.startsWith('step-'))
    .map(({ verdict }) => verdict);

describe('refinedSetup', () => {
  it.each([
    [2, 480, 280, 0.125],
    [0.5, 120, 70, 0.5],
  ] as const)('brings the Corvane setup to %f times its resolution', (factor, nx, ny, spacing) => {
    const parent = corvaneForCheck();
    const { setup, sections, notes } = refinedSetup(parent, factor, 'anew');
    const grid = buildGrid(setup);
    expect([grid.nx, grid.ny, grid.equatorRow]).toEqual([nx, ny, ny / 2]);
    expect(notes).toEqual([]);
    expect(sections).toEqual([{ fromDeg: 0, toDeg: 0, moved: false }]);
    // Nothing else may differ: what converges must be one and the same problem.
    const changed = diffSetups(parent, setup).map(({ pointer }) => pointer);
    expect(changed).toEqual([
      '/numerics/spacingLongitudeDeg',
      '/numerics/spacingLatitudeDeg',
      ...(setup.numerics.stepsPerDay === 16 ? [] : ['/numerics/stepsPerDay']),
    ]);
    expect(setup.numerics.spacingLongitudeDeg).toBe(spacing);
    expect(stepVerdicts(setup)).toEqual(['pass', 'pass', 'pass', 'pass']);
  });

  it.each([2, 0.5] as const)('keeps the step of a nonlinear run within its bounds at %f times', (factor) => {
    const linear = corvaneForCheck();
    const parent: Setup = {
      ...linear,
      layer: {
        ...linear.layer,
        entrainment: { onsetThicknessM: 60, timescaleDays: 10, detrainment: 'none' },
      },
      numerics: { ...linear.numerics, equations: 'nonlinear', stepsPerDay: 20 },
    };
    const { setup } = refinedSetup(parent, factor, 'same');
    expect(stepVerdicts(setup)).toEqual(['pass', 'pass', 'pass', 'pass', 'pass']);
    expect([setup.layer, setup.numerics.equations]).toEqual([parent.layer, 'nonlinear']);
  });

  it('takes at least as many steps in proportion as the parent, and a step that preflight passes', () => {
    const steps = (n: number, factor: 2 | 0.5) =>
      refinedSetup(
        { ...corvaneForCheck(), numerics: { ...corvaneForCheck().numerics, stepsPerDay: n } },
        factor,
        'anew',
      ).setup.numerics.stepsPerDay;
    // Proposed for 1/8° is more than twice 16, since the viscous limit goes with the square of the spacing.
    expect(steps(16, 2)).toBeGreaterThan(32);
    expect(steps(16, 2) % 4).toBe(0);
    expect(steps(100, 2)).toBe(200);
    expect(steps(100, 0.5)).toBe(52);
    expect(steps(16, 0.5)).toBeGreaterThanOrEqual(8);
  });

  it('writes the raster of the coast down when it is to stay, and only where there is a coast', () => {
    const parent = corvaneForCheck();
    expect(refinedSetup(parent, 2, 'same').setup.basin.coastSpacing).toEqual({
      longitudeDeg: 0.25,
      latitudeDeg: 0.25,
    });
    const own = { longitudeDeg: 0.5, latitudeDeg: 0.5 };
    const rastered = { ...parent, basin: { ...parent.basin, coastSpacing: own } };
    expect(refinedSetup(rastered, 2, 'same').setup.basin.coastSpacing).toEqual(own);
    expect(refinedSetup(rastered, 2, 'anew').setup.basin.coastSpacing).toBeNull();
    expect(refinedSetup(withBasin({ islands: [] }), 2, 'same').setup.basin.coastSpacing).toBeNull();
  });

  it('divides the land cells of the parent 2 × 2 when the coast stays', () => {
    const parent = { ...corvaneForCheck(), output: { ...corvaneForCheck().output, moorings: [] } };
    const coarse = buildGrid(parent);
    const fine = buildGrid(refinedSetup(parent, 2, 'same').setup);
    const divided = Uint8Array.from(
      { length: fine.nx * fine.ny },
      (_, k) => coarse.mask[(Math.floor(k / fine.nx) >> 1) * coarse.nx + ((k % fine.nx) >> 1)],
    );
    expect(fine.mask.every((wet, k) => wet === divided[k])).toBe(true);
    const anew = buildGrid(refinedSetup(parent, 2, 'anew').setup);
    expect(anew.mask.every((wet, k) => wet === divided[k])).toBe(false);
  });

  it('keeps the edges that snapping gave the parent, and its coast on its line', () => {
    const parent = withBasin({
      southDeg: -8.2,
      northDeg: 10,
      westernCoast: { kind: 'slanting', atSouthDeg: 0, atNorthDeg: 4 },
    });
    const from = gridLayout(parent);
    expect(from.meridional.start).toBe(-8);
    for (const factor of [2, 0.5] as const) {
      const { setup } = refinedSetup(parent, factor, 'anew');
      const to = gridLayout(setup);
      expect([to.meridional.start, to.meridional.cells]).toEqual([-8, from.meridional.cells * factor]);
      for (const latitude of [-8, 0, 3.3, 10])
        expect(coastLongitude(setup.basin, latitude)).toBeCloseTo(coastLongitude(parent.basin, latitude), 12);
    }
  });

  it('has every second line of the finer grid in the coarser one, whatever the edges', () => {
    const edges = fc.record({
      south: fc.integer({ min: -170, max: -20 }),
      north: fc.integer({ min: 20, max: 170 }),
      spacing: fc.constantFrom(0.2, 0.25, 0.37, 0.5),
      geometry: fc.constantFrom('equatorial' as const, 'midlatitude' as const, 'spherical' as const),
    });
    fc.assert(
      fc.property(edges, ({ south, north, spacing, geometry }) => {
        const parent = withBasin({ geometry, southDeg: south / 10, northDeg: north / 10 });
        parent.numerics = { ...parent.numerics, spacingLongitudeDeg: spacing, spacingLatitudeDeg: spacing };
        parent.output = { ...parent.output, moorings: [] };
        const grid = buildGrid(parent);
        const fine = buildGrid(refinedSetup(parent, 2, 'anew').setup);
        expect([fine.nx, fine.ny]).toEqual([2 * grid.nx, 2 * grid.ny]);
        grid.latFace.forEach((latitude, j) => expect(fine.latFace[2 * j]).toBeCloseTo(latitude, 9));
        grid.lonFace.forEach((longitude, i) => expect(fine.lonFace[2 * i]).toBeCloseTo(longitude, 9));
        // The finer one can always be halved again, and is then the parent.
        const back = buildGrid(refinedSetup(refinedSetup(parent, 2, 'anew').setup, 0.5, 'anew').setup);
        expect([back.nx, back.ny, back.equatorRow]).toEqual([grid.nx, grid.ny, grid.equatorRow]);
      }),
      { numRuns: 40 },
    );
  });

  it('keeps a section on the line that the parent snapped it to', () => {
    const parent = smallSetup();
    parent.output = {
      ...parent.output,
      moorings: [],
      sections: [
        { name: 'Between', along: 'latitude', atDeg: 2.15 },
        { name: 'Odd row', along: 'latitude', atDeg: 2.5 },
        { name: 'Middle', along: 'longitude', atDeg: 10 },
      ],
    };
    const lines = (setup: Setup) =>
      setup.output.sections.map((section) => snapSection(buildGrid(setup), section).atDeg);
    expect(lines(parent)).toEqual([2, 2.5, 10]);
    const fine = refinedSetup(parent, 2, 'anew');
    expect(lines(fine.setup)).toEqual([2, 2.5, 10]);
    expect(fine.notes).toEqual([]);
    const coarse = refinedSetup(parent, 0.5, 'anew');
    expect(coarse.sections.map(({ moved }) => moved)).toEqual([false, true, false]);
    expect(lines(coarse.setup)).toEqual(coarse.sections.map(({ toDeg }) => toDeg));
    expect(coarse.notes).toEqual([expect.stringMatching(/“Odd row” moves from 2\.5° to 3°/)]);
  });

  it('says where moorings go, and leaves out those that would lie on land', () => {
    const parent = smallSetup();
    parent.output = {
      ...parent.output,
      moorings: [
        { name: 'Near', longitudeDeg: 11.75, latitudeDeg: -3.25 },
        { name: 'Far', longitudeDeg: 18.3, latitudeDeg: 0.2 },
      ],
    };
    // The island holds the centre of the wide cell around “Near”, at 11.5° E, and not that of the parent's, at 11.75° E.
    parent.basin = {
      ...parent.basin,
      islands: [{ kind: 'box', name: '', westDeg: 11.4, eastDeg: 11.6, southDeg: -4, northDeg: -2 }],
    };
    const { setup, notes } = refinedSetup(parent, 0.5, 'anew');
    expect(setup.output.moorings.map(({ name }) => name)).toEqual(['Far']);
    expect(notes.join(' ')).toMatch(/“Near” would lie on land here and is left out/);
    expect(notes.join(' ')).toMatch(/“Far” from 18\.25° E, 0\.25° N to 18\.5° E, 0\.5° N/);
  });

  it.each([
    [{ eastDeg: 20.5 }, /even number of columns; this run has 41/],
    [{ geometry: 'midlatitude', southDeg: 20, northDeg: 30.5 }, /even number of rows; this run has 21/],
    [
      { southDeg: -7.5, northDeg: 7.5 },
      /on either side of the equator; this run has 15 south of it and 15 north of it/,
    ],
  ] as const)('refuses to halve %j', (basin, words) => {
    const parent = withBasin(basin, { output: { ...smallSetup().output, moorings: [] } });
    expect(() => refinedSetup(parent, 0.5, 'anew')).toThrow(words);
    expect(() => refinedSetup(parent, 2, 'anew')).not.toThrow();
  });

  it('refuses a run that goes on from another one', () => {
    const start = {
      kind: 'state' as const,
      runId: 'r',
      fingerprint: 'f',
      stateSha256: 's',
      startStep: 12,
      stepsPerDay: 12,
    };
    expect(() => refinedSetup(smallSetup({ start }), 2, 'same')).toThrow(/exists on its own grid alone/);
  });
});
