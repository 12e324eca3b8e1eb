import { expect, it } from 'vitest';
import { planeGrid } from '../grid/grid';
import { fieldOf } from './fields';
import { forRuns } from './model';
import { randomModel } from './nonlinear/testing';
import { stepModel } from './stepper';

// Rings hold rows of the step before; dry stretches are skipped, so what a neighbour reads there must be made or cleared.
it.each([
  ['linear', false],
  ['linear', true],
  ['nonlinear', false],
  ['nonlinear', true],
] as const)('land of every size stays exactly 0 and the water finite: %s, periodic %s', (equations, periodic) => {
  const grid = planeGrid({
    nx: 40,
    ny: 36,
    dx: 5e4,
    dy: 5e4,
    y0: -9e5,
    periodic,
    f: (y) => 2.3e-11 * y,
    beta: 2.3e-11,
    // An island of 12 × 12 cells, a bar that leaves rows dry, a pond behind it, a single rock.
    isWater: (x, y) =>
      !(x > 6e5 && x < 1.2e6 && y > -7e5 && y < -1e5) &&
      !(y > 3e5 && y < 6.5e5 && !(x > 1.5e6 && x < 1.8e6 && y > 4e5 && y < 5.5e5)) &&
      !(Math.abs(x - 1.625e6) < 1e4 && Math.abs(y + 3.25e5) < 1e4),
  });
  const model = randomModel(3, {
    grid,
    equations,
    dt: 1500,
    thickness: equations === 'linear' ? 120 : 100,
    departure: 5,
    speed: 0.1,
    viscosity: 2000,
    minimumThickness: 20,
    slip: 'none',
  });
  for (let n = 0; n < 60; n++) stepModel(model, n % 2 === 0);
  const { spans } = model;
  for (const [variable, points, rows, columns] of [
    ['h', spans.cells, grid.ny, grid.nx],
    ['u', spans.uPoints, grid.ny, grid.nx],
    ['v', spans.vPoints, grid.ny + 1, grid.nx],
  ] as const) {
    const { data, offset, rowStride } = fieldOf(model, variable);
    let moving = 0;
    for (let j = 0; j < rows; j++) {
      const water = new Uint8Array(columns);
      forRuns(points, j, (first, end) => water.fill(1, first, end));
      for (let i = 0; i < columns; i++) {
        const value = data[offset + j * rowStride + i];
        expect(Number.isFinite(value)).toBe(true);
        if (!water[i]) expect(value, `${variable}[${j}][${i}]`).toBe(0);
        else moving += Math.abs(value);
      }
    }
    expect(moving).toBeGreaterThan(0);
  }
});
