import { expect, it } from 'vitest';
import { smallSetup } from '../testing/setups';
import { buildGrid } from './build-grid';
import { viscosityAt, viscosityMaps } from './viscosity-map';

const base = smallSetup();
const patch = (addedM2S: number) => ({
  name: 'Shelf',
  addedM2S,
  longitudeDeg: 5,
  latitudeDeg: -2,
  widthLongitudeDeg: 2,
  widthLatitudeDeg: 1,
});
const withPatches = (...added: number[]) => ({ friction: { ...base.friction, viscosityPatches: added.map(patch) } });
const grid = buildGrid(base);

it('is not there where viscosity is the same everywhere', () => {
  expect(viscosityMaps(base, grid)).toBeNull();
  expect(viscosityMaps(withPatches(0), grid)).toBeNull();
});

it('adds a Gaussian of its own widths about its place', () => {
  const { friction } = withPatches(1000);
  expect(viscosityAt(friction, 5, -2)).toBe(5000);
  expect(viscosityAt(friction, 7, -2)).toBeCloseTo(4000 + 1000 * Math.exp(-0.5), 9);
  expect(viscosityAt(friction, 5, -1)).toBeCloseTo(4000 + 1000 * Math.exp(-0.5), 9);
  expect(viscosityAt(withPatches(1000, 500).friction, 5, -2)).toBe(5500);
});

it('is the same, to the last bit, at every cell and corner', () => {
  const setup = withPatches(1000, 700);
  const { cell, corner } = viscosityMaps(setup, grid)!;
  const { nx, ny } = grid;
  expect([cell.length, corner.length]).toEqual([nx * ny, (nx + 1) * (ny + 1)]);
  for (let j = 0; j < ny; j++)
    for (let i = 0; i < nx; i++)
      expect(cell[j * nx + i]).toBe(viscosityAt(setup.friction, grid.lonCentre[i], grid.latCentre[j]));
  for (let j = 0; j <= ny; j++)
    for (let i = 0; i <= nx; i++)
      expect(corner[j * (nx + 1) + i]).toBe(viscosityAt(setup.friction, grid.lonFace[i], grid.latFace[j]));
});
