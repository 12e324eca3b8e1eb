import fc from 'fast-check';
import { expect, it } from 'vitest';
import { buildGrid, gridLayout } from '../grid/build-grid';
import { snapMooring } from '../integration/moorings';
import { snapSection } from '../integration/sections';
import { corvaneSetup } from '../presets/corvane';
import type { Island, Setup } from '../setup';
import { LandRows } from './land-rows';

const degrees = (min: number, max: number) =>
  fc.integer({ min: min * 100, max: max * 100 }).map((value) => value / 100);
const box: fc.Arbitrary<Island> = fc
  .tuple(degrees(-5, 60), degrees(0.1, 20), degrees(-20, 15), degrees(0.1, 10))
  .map(([west, width, south, height]) => ({
    kind: 'box',
    name: '',
    westDeg: west,
    eastDeg: west + width,
    southDeg: south,
    northDeg: south + height,
  }));
const polygon: fc.Arbitrary<Island> = fc
  .array(fc.tuple(degrees(-5, 65), degrees(-20, 20)), { minLength: 3, maxLength: 9 })
  .map((points) => ({ kind: 'polygon', name: '', points }));
const basins: fc.Arbitrary<Setup> = fc
  .record({
    islands: fc.array(fc.oneof(box, polygon), { maxLength: 4 }),
    slanting: fc.option(fc.tuple(degrees(-10, 70), degrees(-10, 70)), { nil: undefined }),
    periodic: fc.boolean(),
    geometry: fc.constantFrom('equatorial' as const, 'midlatitude' as const, 'spherical' as const),
    southDeg: degrees(-18, -1),
    spacingLatitudeDeg: degrees(0.4, 3),
    spacingLongitudeDeg: degrees(0.4, 3),
    coast: fc.option(fc.tuple(fc.constantFrom(1, 2, 3, 1 / 2, 1 / 3), fc.constantFrom(1, 2, 3, 1 / 2, 1 / 3))),
  })
  .map(({ islands, slanting, periodic, geometry, southDeg, coast, ...spacings }) => {
    const setup = corvaneSetup();
    Object.assign(setup.numerics, spacings);
    Object.assign(setup.basin, {
      islands,
      geometry,
      southDeg,
      zonallyPeriodic: periodic && !slanting,
      coastSpacing: coast && {
        longitudeDeg: spacings.spacingLongitudeDeg * coast[0],
        latitudeDeg: spacings.spacingLatitudeDeg * coast[1],
      },
      westernCoast: slanting
        ? { kind: 'slanting', atSouthDeg: slanting[0], atNorthDeg: slanting[1] }
        : { kind: 'rectangular' },
    });
    return setup;
  });

it('has the very cells of the core’s land mask, for any coast and islands', () => {
  let compared = 0;
  fc.assert(
    fc.property(basins, (setup) => {
      const land = LandRows.of(setup, gridLayout(setup));
      if (land.wetCells() === 0) {
        expect(() => buildGrid(setup)).toThrow(RangeError);
        return;
      }
      const { nx, ny, mask, wetCells } = buildGrid(setup);
      const own = Uint8Array.from({ length: nx * ny }, (_, k) => (land.isWet(k % nx, Math.floor(k / nx)) ? 1 : 0));
      expect(own.every((value, k) => value === mask[k]) && own.length === mask.length).toBe(true);
      expect(land.wetCells()).toBe(wetCells);
      compared++;
    }),
    { numRuns: 150 },
  );
  expect(compared).toBeGreaterThan(75);
}, 60_000);

it('finds water on the lines of sections, and moorings, where the core does', () => {
  fc.assert(
    fc.property(basins, degrees(0, 60), degrees(-17, 17), (setup, longitude, latitude) => {
      const land = LandRows.of(setup, gridLayout(setup));
      if (land.wetCells() === 0) return;
      const grid = buildGrid(setup);
      const wet = (i: number, j: number) => land.isWet(i, j);
      const at = Math.max(latitude, setup.basin.southDeg);
      const { index: row } = snapSection(grid, { name: '', along: 'latitude', atDeg: at });
      expect(land.rowHasWater(row)).toBe(
        Array.from({ length: grid.nx }).some((_, i) => wet(i, row - 1) && wet(i, row)),
      );
      const { index: column } = snapSection(grid, { name: '', along: 'longitude', atDeg: longitude });
      expect(land.columnHasWater(column)).toBe(
        Array.from({ length: grid.ny }).some((_, j) => wet(column - 1, j) && wet(column, j)),
      );
      const mooring = { name: '', longitudeDeg: longitude, latitudeDeg: at };
      const cell = land.cellAt(longitude, at);
      if (cell && wet(cell.i, cell.j)) expect(snapMooring(grid, mooring)).toMatchObject(cell);
      else expect(() => snapMooring(grid, mooring)).toThrow(RangeError);
    }),
    { numRuns: 150 },
  );
}, 60_000);

it('finds the nearest water cell', () => {
  fc.assert(
    fc.property(basins, fc.nat(1000), fc.nat(1000), (setup, p, q) => {
      const layout = gridLayout(setup);
      const land = LandRows.of(setup, layout);
      const [i, j] = [p % layout.nx, q % layout.ny];
      const found = land.nearestWater(i, j, 2, 1);
      if (land.wetCells() === 0) {
        expect(found).toBeNull();
        return;
      }
      let shortest = Infinity;
      for (let row = 0; row < layout.ny; row++)
        for (let column = 0; column < layout.nx; column++)
          if (land.isWet(column, row)) shortest = Math.min(shortest, Math.hypot(2 * (column - i), row - j));
      expect(Math.hypot(2 * (found!.i - i), found!.j - j)).toBe(shortest);
      expect(land.isWet(found!.i, found!.j)).toBe(true);
    }),
    { numRuns: 100 },
  );
}, 60_000);
