import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Basin, Setup } from '../setup';
import { corvaneForCheck, smallSetup } from '../testing/setups';
import { buildGrid } from './build-grid';
import { isWet, planeGrid } from './grid';

const base = smallSetup();
const gridOf = (basin: Partial<Basin>, spacing = 0.5) =>
  buildGrid({
    ...base,
    basin: { ...base.basin, islands: [], ...basin },
    numerics: { ...base.numerics, spacingLongitudeDeg: spacing, spacingLatitudeDeg: spacing },
  });

describe('equatorial plane', () => {
  it('has the equator exactly on a v row, f exactly 0 there and antisymmetric about it', () => {
    for (const [south, north, spacing] of [
      [-8, 8, 0.5],
      [-17.5, 17.5, 0.25],
      [-3.3, 9.1, 0.37],
      [-10, 2.05, 0.3],
      [-0.1, 5, 0.5],
    ]) {
      const grid = gridOf({ southDeg: south, northDeg: north }, spacing);
      const row = grid.equatorRow ?? -1;
      expect(grid.latFace[row]).toBe(0);
      expect(grid.f[row]).toBe(0);
      for (let k = 1; k <= Math.min(row, grid.ny - row); k++) expect(grid.f[row + k]).toBe(-grid.f[row - k]);
      // Edges move by no more than half a cell, or to the one row that an edge off the equator keeps.
      const dLat = grid.latFace[1] - grid.latFace[0];
      expect(Math.abs(grid.latFace[0] - south)).toBeLessThanOrEqual(Math.max(dLat / 2, dLat - Math.abs(south)) + 1e-9);
      expect(Math.abs(grid.latFace[grid.ny] - north)).toBeLessThanOrEqual(dLat / 2 + 1e-9);
    }
  });
  it('says what it moved, and nothing when all fits', () => {
    expect(gridOf({ southDeg: -8, northDeg: 8 }).notes).toEqual([]);
    const { notes, latFace } = gridOf({ southDeg: -8.2, northDeg: 10 });
    expect(notes).toHaveLength(1);
    expect(notes[0]).toMatch(/South edge moved by 0.2° to −8°.*equator/);
    expect(latFace[0]).toBe(-8);
    expect(gridOf({ southDeg: -7, northDeg: 10.1 }).notes[0]).toMatch(
      /Spacing in latitude changed from 0.5° to 0.505°/,
    );
  });
  it('takes β = 2Ω/a from the constants, or as set by hand', () => {
    expect(gridOf({}).beta).toBe((2 * 7.2921e-5) / 6.371e6);
    expect(gridOf({ betaPerMS: 2e-11 }).beta).toBe(2e-11);
  });
  it('fills a basin off the equator from its edges', () => {
    const grid = gridOf({ southDeg: 3, northDeg: 9 });
    expect(grid.equatorRow).toBeNull();
    expect(grid.f[0]).toBeCloseTo(grid.beta * 6.371e6 * (3 / 180) * Math.PI, 15);
  });
});

describe('mid-latitude and f-plane', () => {
  const f30 = 2 * 7.2921e-5 * 0.5;
  it('take f0 and β at the reference latitude, and shrink x by its cosine', () => {
    const grid = gridOf({ geometry: 'midlatitude', southDeg: 20, northDeg: 40 });
    expect(grid.f[grid.ny / 2]).toBeCloseTo(f30, 15);
    expect(grid.beta).toBeCloseTo(((2 * 7.2921e-5) / 6.371e6) * Math.cos(Math.PI / 6), 24);
    expect(grid.dxC[0] / grid.dy).toBeCloseTo(Math.cos(Math.PI / 6), 12);
    const south = gridOf({ geometry: 'midlatitude', southDeg: 20, northDeg: 40, referenceLatitudeDeg: 25 });
    expect(south.f[south.ny / 2]).toBeGreaterThan(2 * 7.2921e-5 * Math.sin((25 * Math.PI) / 180));
  });
  it('an f-plane has one f, which may be set by hand', () => {
    const own = gridOf({ geometry: 'fplane', southDeg: 20, northDeg: 40 });
    expect(own.beta).toBe(0);
    for (const f of own.f) expect(f).toBeCloseTo(f30, 15);
    expect(gridOf({ geometry: 'fplane', southDeg: 20, northDeg: 40, f0PerS: -1e-4 }).f[3]).toBe(-1e-4);
  });
});

describe('spherical band', () => {
  const a = 6.371e6;
  const radians = Math.PI / 180;
  const near = (value: number, expected: number) => expect(Math.abs(value / expected - 1)).toBeLessThan(1e-14);
  it('has dx = a cos φ Δλ at its own rows of cells and of corners, dy = a Δφ', () => {
    const grid = gridOf({ geometry: 'spherical', southDeg: 20, northDeg: 60 });
    near(grid.dy, a * 0.5 * radians);
    grid.dxC.forEach((dx, j) => near(dx, a * Math.cos(grid.latCentre[j] * radians) * 0.5 * radians));
    grid.dxV.forEach((dx, j) => near(dx, a * Math.cos(grid.latFace[j] * radians) * 0.5 * radians));
    // The area of a band is 2π a² (sin φN − sin φS) of a whole sphere: the midpoint rule is second order.
    const area = grid.dxC.reduce((sum, dx) => sum + dx * grid.dy * grid.nx, 0);
    const exact = (20 * radians) * a * a * (Math.sin(60 * radians) - Math.sin(20 * radians)); // prettier-ignore
    expect(Math.abs(area / exact - 1)).toBeLessThan((0.5 * radians) ** 2 / 23);
  });
  it('has f = 2Ω sin φ, exactly 0 on the equator and antisymmetric about it', () => {
    const grid = gridOf({ geometry: 'spherical', southDeg: -30.3, northDeg: 40 });
    const row = grid.equatorRow ?? -1;
    expect([grid.latFace[row], grid.f[row]]).toEqual([0, 0]);
    for (let k = 1; k <= Math.min(row, grid.ny - row); k++) expect(grid.f[row + k]).toBe(-grid.f[row - k]);
    grid.f.forEach((f, j) => {
      if (j !== row) near(f, 2 * 7.2921e-5 * Math.sin(grid.latFace[j] * radians));
    });
    expect(grid.notes[0]).toMatch(/South edge moved .* so that the equator lies on a row of v points/);
  });
  it('does not use a reference latitude, f0 or β set by hand', () => {
    const plain = gridOf({ geometry: 'spherical', southDeg: 20, northDeg: 60 });
    const set = gridOf({ geometry: 'spherical', southDeg: 20, northDeg: 60, referenceLatitudeDeg: 5, f0PerS: 1e-4, betaPerMS: 1e-12 }); // prettier-ignore
    expect(set).toEqual(plain);
    near(plain.beta, ((2 * 7.2921e-5) / a) * Math.cos(40 * radians));
  });
  it('goes all the way round, to 80° either side', () => {
    const whole = { geometry: 'spherical', westDeg: 0, eastDeg: 360, southDeg: -80, northDeg: 80 } as const;
    const grid = gridOf({ ...whole, zonallyPeriodic: true }, 1);
    expect([grid.nx, grid.ny, grid.periodic, grid.equatorRow, grid.notes]).toEqual([360, 160, true, 80, []]);
    expect(isWet(grid, -1, 3)).toBe(true);
  });
  it('refuses a spacing that is too small at its highest latitude', () => {
    expect(() => gridOf({ geometry: 'spherical', eastDeg: 1, southDeg: 78, northDeg: 80 }, 0.01)).toThrow(
      /zonal grid spacing must be between 0.5 and 600 km; 0.1931 km arrived/,
    );
  });
});

describe('the grid of the coast', () => {
  const isle: [number, number][] = [[5.2, -2.3], [9.1, -1.2], [8.3, 2.4], [6.1, 1.7]]; // prettier-ignore
  const land: Partial<Basin> = {
    westernCoast: { kind: 'slanting', atSouthDeg: 0, atNorthDeg: 3 },
    islands: [{ kind: 'polygon', name: '', points: isle }],
  };
  const with2 = (basin: Partial<Basin>, spacing: number, coast: number | null) =>
    gridOf(
      { ...land, ...basin, coastSpacing: coast === null ? null : { longitudeDeg: coast, latitudeDeg: coast } },
      spacing,
    );
  it.each([2, 3])('divides each land cell of a grid %i times as coarse', (factor) => {
    const coarse = with2({}, 0.5, null);
    const fine = with2({}, 0.5 / factor, 0.5);
    expect(fine.notes).toEqual([]);
    for (let j = 0; j < fine.ny; j++)
      for (let i = 0; i < fine.nx; i++)
        expect(fine.mask[j * fine.nx + i]).toBe(
          coarse.mask[Math.floor(j / factor) * coarse.nx + Math.floor(i / factor)],
        );
    expect(fine.wetCells).toBe(coarse.wetCells * factor * factor);
    expect(fine.mask).not.toEqual(with2({}, 0.5 / factor, null).mask);
  });
  it('makes a cell land when at least half of the finer cells in it are', () => {
    const fine = with2({}, 0.25, null);
    const coarse = with2({}, 0.5, 0.25);
    let halves = 0;
    for (let j = 0; j < coarse.ny; j++)
      for (let i = 0; i < coarse.nx; i++) {
        const four = [0, 1, fine.nx, fine.nx + 1].map((k) => fine.mask[2 * j * fine.nx + 2 * i + k]);
        const dry = four.filter((wet) => wet === 0).length;
        expect(coarse.mask[j * coarse.nx + i]).toBe(dry >= 2 ? 0 : 1);
        if (dry === 2) halves++;
      }
    expect(halves).toBeGreaterThan(0);
  });
  it('is the own one where the spacings are alike, and may differ by axis', () => {
    expect(with2({}, 0.5, 0.5).mask).toEqual(with2({}, 0.5, null).mask);
    const mixed = gridOf({ ...land, coastSpacing: { longitudeDeg: 1, latitudeDeg: 0.25 } }, 0.5);
    const raster = buildGrid({
      ...base,
      basin: { ...base.basin, ...land },
      numerics: { ...base.numerics, spacingLongitudeDeg: 1, spacingLatitudeDeg: 0.25 },
    });
    for (let j = 0; j < mixed.ny; j++)
      for (let i = 0; i < mixed.nx; i++) {
        const x = Math.floor(i / 2);
        const wet = raster.mask[2 * j * raster.nx + x] + raster.mask[(2 * j + 1) * raster.nx + x];
        expect(mixed.mask[j * mixed.nx + i]).toBe(wet === 2 ? 1 : 0);
      }
  });
  it('says when the two do not nest, and refuses too many cells', () => {
    const uneven = with2({ eastDeg: 20.5 }, 0.5, 1);
    expect(uneven.notes).toEqual([
      'The coast’s grid of 21 × 16 cells does not divide the run’s 41 × 32 evenly; each cell takes the land at its place.',
    ]);
    expect(() => with2({}, 0.5, 0.005)).toThrow(/grid of the coast has at most 4000000 cells; .* 4000 × 3200/);
  });
});

describe('land', () => {
  it('lies west of a slanting coast, by cell centres', () => {
    const grid = buildGrid(corvaneForCheck());
    expect([grid.nx, grid.ny, grid.notes]).toEqual([240, 140, []]);
    for (let j = 0; j < grid.ny; j++) {
      const coast = (6 * (grid.latCentre[j] + 17.5)) / 35;
      for (let i = 0; i < 30; i++) expect(grid.mask[j * 240 + i]).toBe(grid.lonCentre[i] < coast ? 0 : 1);
    }
    // Tern-like island: 40.5–43.5° E, 6–8° S is 12 × 8 cells.
    const island = [...grid.mask].filter((wet, k) => wet === 0 && k % 240 > 30).length;
    expect(island).toBe(96);
    expect(grid.wetCells).toBe(grid.mask.reduce((sum, wet) => sum + wet, 0));
  });
  it('takes polygons by the even-odd rule', () => {
    const square: [number, number][] = [
      [5, -2],
      [9, -2],
      [9, 2],
      [5, 2],
    ];
    // A ring that winds around the same square and back around a smaller one leaves a lake.
    const withLake: [number, number][] = [...square, [5, -2], [6, -1], [6, 1], [8, 1], [8, -1], [6, -1]];
    const at = (ring: [number, number][], lon: number, lat: number) => {
      const grid = gridOf({ islands: [{ kind: 'polygon', name: '', points: ring }] });
      return grid.mask[Math.floor((lat + 8) / 0.5) * grid.nx + Math.floor(lon / 0.5)];
    };
    expect(at(square, 7.1, 0.1)).toBe(0);
    expect(at(square, 4.1, 0.1)).toBe(1);
    expect(at(withLake, 7.1, 0.1)).toBe(1);
    expect(at(withLake, 5.1, 0.1)).toBe(0);
  });
  it('has the cells that a ray to the east leaves through an odd number of edges, for any ring', () => {
    const corner = fc.tuple(fc.integer({ min: -4, max: 44 }), fc.integer({ min: -20, max: 20 }));
    let land = 0;
    fc.assert(
      fc.property(fc.array(corner, { minLength: 3, maxLength: 12 }), (corners) => {
        // Quarter degrees: corners and edges through cell centres are among them.
        const points = corners.map(([x, y]): [number, number] => [x / 2 + 0.25, y / 2 + 0.25]);
        const inside = (lon: number, lat: number) => {
          const leaves = points.filter(([x1, y1], k) => {
            const [x2, y2] = points[(k + 1) % points.length];
            return y1 > lat !== y2 > lat && lon < x1 + ((lat - y1) / (y2 - y1)) * (x2 - x1);
          });
          return leaves.length % 2 === 1;
        };
        const { nx, lonCentre, latCentre, mask } = gridOf({ islands: [{ kind: 'polygon', name: '', points }] });
        const expected = mask.map((_wet, k) => (inside(lonCentre[k % nx], latCentre[Math.floor(k / nx)]) ? 0 : 1));
        expect(mask).toEqual(expected);
        land += expected.filter((wet) => wet === 0).length;
      }),
    );
    expect(land).toBeGreaterThan(1000);
  });
  it('wraps on a periodic grid and not on a closed one', () => {
    const [periodic, closed] = [true, false].map((zonallyPeriodic) => gridOf({ zonallyPeriodic }));
    expect([isWet(periodic, -1, 3), isWet(closed, -1, 3)]).toEqual([true, false]);
    expect(isWet(periodic, 3, -1)).toBe(false);
  });
});

describe('refusals name the limit', () => {
  const refuse = (change: (setup: Setup) => Setup, message: RegExp) =>
    expect(() => buildGrid(change(structuredClone(base)))).toThrow(message);
  it.each([
    [
      'too many cells',
      { spacingLongitudeDeg: 0.006, spacingLatitudeDeg: 0.006 },
      /at most 4000000 cells; this one would have 3333 × /,
    ],
    ['too few cells', { spacingLongitudeDeg: 6, spacingLatitudeDeg: 6 }, /at least 16 cells; this one would have 3 × /],
    ['no spacing', { spacingLongitudeDeg: 0 }, /spacing in longitude must be a positive number of degrees; 0° arrived/],
    ['not a number', { spacingLatitudeDeg: NaN }, /spacing in latitude .* NaN° arrived/],
  ])('%s', (_name, numerics, message) => {
    refuse((setup) => ({ ...setup, numerics: { ...setup.numerics, ...numerics } }), message);
  });
  it('edges the wrong way round, spacing in km, and a basin without water', () => {
    refuse((setup) => ({ ...setup, basin: { ...setup.basin, eastDeg: -5 } }), /extent in longitude .* −?-?5° arrived/);
    refuse(
      (setup) => ({
        ...setup,
        constants: { ...setup.constants, earthRadiusM: 1e8 },
        numerics: { ...setup.numerics, spacingLongitudeDeg: 1 },
      }),
      /zonal grid spacing must be between 0.5 and 600 km; 1745 km arrived/,
    );
    const everywhere = { kind: 'box', name: '', westDeg: -1, eastDeg: 21, southDeg: -9, northDeg: 9 } as const;
    refuse((setup) => ({ ...setup, basin: { ...setup.basin, islands: [everywhere] } }), /cover every cell/);
    expect(() => planeGrid({ nx: 0, ny: 3, dx: 1, dy: 1, f: () => 0 })).toThrow(/0, 3, 1, 1 arrived/);
  });
});
