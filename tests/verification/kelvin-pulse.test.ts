import { describe, expect, it } from 'vitest';
import { padded, planeGrid, setState, stepModel } from '@halfdeep/ocean';
import { beta, c, commonModel, commonStep, g, order, relativeL2, stepsFor } from './common';

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

function run(dx: number): { l2: number; speedError: number; largestV: number } {
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
  for (let n = 0; n < steps; n++) stepModel(model);
  const found: number[] = [];
  for (let j = 0; j < grid.ny; j++) for (let i = 0; i < grid.nx; i++) found.push(model.eta.now[padded(grid, i, j)]);
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
    largestV: model.v.now.reduce((most, v) => Math.max(most, Math.abs(v)), 0),
  };
}

describe('equatorial Kelvin pulse (Matsuno 1966)', () => {
  const [coarse, middle, fine] = [100e3, 50e3, 25e3].map(run);

  it('keeps its shape: relative L2 error below 1 % at 50 km', () => {
    expect(middle.l2).toBeLessThan(0.01);
    expect(fine.l2).toBeLessThan(0.003);
  });
  it('moves east at c: within 0.2 % at 50 km', () => {
    expect(Math.abs(middle.speedError)).toBeLessThan(2e-3);
    expect(Math.abs(fine.speedError)).toBeLessThan(5e-4);
  });
  it('converges at second order', () => {
    expect(order(coarse.l2, middle.l2)).toBeGreaterThan(1.8);
    expect(order(middle.l2, fine.l2)).toBeGreaterThan(1.9);
    expect(order(middle.speedError, fine.speedError)).toBeGreaterThan(1.8);
  });
  it('has hardly any cross-equatorial velocity', () => {
    expect(middle.largestV).toBeLessThan(0.02 * (g / c) * 5);
  });
});
