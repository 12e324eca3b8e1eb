import { describe, expect, it } from 'vitest';
import { planeGrid, setState, valueAt } from '@halfdeep/ocean';
import { advance, beta, c, commonModel, commonStep, g, order, relativeL2, stepsFor } from './common';
import { convergencePlate, profilePlate } from './plates';
import { proveCase } from './record';

// Case a. Equatorial Kelvin pulse: Matsuno (1966), J. Meteorol. Soc. Japan 44, 25–43; Gill (1982), Atmosphere–Ocean
// Dynamics, § 11.5. η and u keep their shape exp(−βy²/2c) and move east at c without change; v stays 0.
const LX = 8e6;
const LY = 3e6;
const DURATION = 1.6e6;
const X0 = 2e6;

function pulse(x: number, y: number, centre: number): number {
  const wrapped = ((((x - centre + LX / 2) % LX) + LX) % LX) - LX / 2;
  return 5 * Math.exp((-beta * y * y) / (2 * c)) * Math.exp((-wrapped * wrapped) / (2 * 5e5 * 5e5));
}

interface Pulse {
  l2: number;
  speedError: number;
  largestV: number;
  /** η along the row next to the equator: km, m. */
  along: { x: number[]; found: number[]; exact: number[] };
}

function run(dx: number): Pulse {
  const grid = planeGrid({
    nx: LX / dx,
    ny: LY / dx,
    dx,
    dy: dx,
    y0: -LY / 2,
    periodic: true,
    f: (y) => beta * y,
    beta,
  });
  const { steps, dt } = stepsFor(DURATION, commonStep(grid));
  const model = commonModel({ grid, dt });
  setState(model, {
    eta: (i, j) => pulse(grid.xCentre[i], grid.yCentre[j], X0),
    u: (i, j) => (g / c) * pulse(grid.xFace[i], grid.yCentre[j], X0),
  });
  advance(model, steps);
  const found: number[] = [];
  let largestV = 0;
  for (let j = 0; j <= grid.ny; j++)
    for (let i = 0; i < grid.nx; i++) largestV = Math.max(largestV, Math.abs(valueAt(model, 'v', i, j)));
  for (let j = 0; j < grid.ny; j++) for (let i = 0; i < grid.nx; i++) found.push(valueAt(model, 'h', i, j));
  const errorAt = (shift: number) => {
    const exact: number[] = [];
    for (let j = 0; j < grid.ny; j++)
      for (let i = 0; i < grid.nx; i++) exact.push(pulse(grid.xCentre[i], grid.yCentre[j], X0 + c * DURATION + shift));
    return relativeL2(found, exact);
  };
  // The shift of the exact pulse that fits best: squared errors are a parabola in the shift.
  const h = 2e4;
  const [west, here, east] = [-h, 0, h].map((shift) => errorAt(shift) ** 2);
  const shift = (h / 2) * ((west - east) / (west - 2 * here + east));
  return {
    l2: errorAt(0),
    speedError: shift / (c * DURATION),
    largestV,
    along: {
      x: Array.from(grid.xCentre, (x) => x / 1e3),
      found: Array.from(grid.xCentre, (_x, i) => valueAt(model, 'h', i, grid.ny / 2)),
      exact: Array.from(grid.xCentre, (x) => pulse(x, grid.yCentre[grid.ny / 2], X0 + c * DURATION)),
    },
  };
}

describe('equatorial Kelvin pulse (Matsuno 1966)', () => {
  const [coarse, middle, fine] = [100e3, 50e3, 25e3].map(run);

  it('keeps its shape: relative L2 error below 1 % at 50 km, second order', (context) => {
    proveCase(context, 'a', {
      id: 'shape',
      quantity: 'η after 1.6e6 s, L2 error',
      expected: 0,
      obtained: middle.l2,
      kind: 'L2',
      tolerance: 0.01,
      order: order(middle.l2, fine.l2),
      orderRange: [1.9, 2.1],
      resolution: 'dx = 50 km; order from 50 and 25 km',
      plate: convergencePlate(
        'Errors of the Kelvin pulse against the spacing: L2 error of η, and the error of its speed.',
        'spacing, km',
        [100, 50, 25],
        [
          { name: 'η, L2', values: [coarse.l2, middle.l2, fine.l2] },
          { name: 'speed', values: [coarse.speedError, middle.speedError, fine.speedError] },
        ],
      ),
    });
    expect(fine.l2).toBeLessThan(0.003);
    expect(order(coarse.l2, middle.l2)).toBeGreaterThan(1.8);
  });
  it('moves east at c: within 0.2 % at 50 km, second order', (context) => {
    proveCase(context, 'a', {
      id: 'speed',
      quantity: 'speed, m/s',
      expected: c,
      obtained: c * (1 + middle.speedError),
      tolerance: 2e-3,
      order: order(middle.speedError, fine.speedError),
      orderRange: [1.8, 2.2],
      resolution: 'dx = 50 km; order from 50 and 25 km',
      plate: profilePlate(
        'The pulse along the row next to the equator after 1.6e6 s, found at 50 km and exact.',
        ['eastward, km', 'η, m'],
        [
          { name: 'exact', role: 'expected', x: middle.along.x, y: middle.along.exact },
          { name: 'found', role: 'found', x: middle.along.x, y: middle.along.found },
        ],
      ),
    });
    expect(Math.abs(fine.speedError)).toBeLessThan(5e-4);
  });
  it('has hardly any cross-equatorial velocity', (context) => {
    proveCase(context, 'a', {
      id: 'cross-equatorial',
      quantity: 'largest |v| over largest u',
      expected: 0,
      obtained: middle.largestV / ((g / c) * 5),
      kind: 'absolute',
      tolerance: 0.02,
      resolution: 'dx = 50 km',
    });
  });
});
