import { describe, expect, it } from 'vitest';
import { etaAt, isWet, planeGrid, setState, stepModel, valueAt, type Grid, type Model } from '@halfdeep/ocean';
import { advance, beta, g, H, noise, nonlinearModel } from './common';
import { proveCase } from './record';

// Case u, nonlinear. Semi-discrete conservation of mass and energy with random states and land (Sadourny 1975, for the
// energy form), and uniform potential vorticity that stays uniform (identities derived for this project).
function randomGrid(seed: number, periodic: boolean, band: boolean): Grid {
  const random = noise(seed);
  const grid = planeGrid({
    nx: 17,
    ny: 13,
    dx: 8e4,
    dy: 6e4,
    y0: -4e5,
    periodic,
    f: (y) => beta * y,
    beta,
    isWater: () => random() > -0.5,
  });
  if (band) {
    grid.dxC.forEach((_dx, j) => (grid.dxC[j] = 8e4 * Math.cos(0.09 * (j + 0.5 - 6.5))));
    grid.dxV.forEach((_dx, j) => (grid.dxV[j] = 8e4 * Math.cos(0.09 * (j - 6.5))));
    grid.f.forEach((_f, j) => (grid.f[j] = 1e-4 * Math.sin(0.09 * (j - 6.5))));
  }
  return grid;
}

/** Random velocities up to 1 m/s and thicknesses of 156 ± 60 m. */
function randomModel(seed: number, grid: Grid, dt: number): Model {
  const model = nonlinearModel({ grid, dt });
  const random = noise(seed + 100);
  setState(model, { eta: () => 60 * random(), u: random, v: random });
  return model;
}

const thickness = (model: Model, i: number, j: number) => {
  const { nx, periodic } = model.grid;
  const k = periodic ? (i + nx) % nx : i;
  return isWet(model.grid, k, j) ? etaAt(model, k, j) + H : 0;
};

/** Source of energy in an instant: the work on the momentum against Σ A_c (g′η + K) div(U, V), over Σ of its sizes. */
function energySource(seed: number, periodic: boolean, band: boolean): number {
  const grid = randomGrid(seed, periodic, band);
  // In a step this short nothing changes by more than a rounding, so that the step's work is the instant's rate.
  const model = randomModel(seed, grid, 1e-12);
  const { nx, ny, dxC, dxV, dy } = grid;
  // Outflow and Bernoulli head of each cell by the formulas of numerics.md §3, apart from the stepper.
  const area = (j: number) => dxC[j] * dy;
  const fluxU = (i: number, j: number) => {
    const east = periodic ? i % nx : i;
    const mean = (thickness(model, i - 1, j) + thickness(model, i, j)) / 2;
    return valueAt(model, 'u', east, j) * mean * dy;
  };
  const fluxV = (i: number, j: number) => {
    if (j === 0 || j === ny) return 0;
    const sum = area(j - 1) * thickness(model, i, j - 1) + area(j) * thickness(model, i, j);
    return (valueAt(model, 'v', i, j) * sum) / 2 / dy;
  };
  let [size, potential] = [0, 0];
  for (let j = 0; j < ny; j++)
    for (let i = 0; i < nx; i++) {
      if (!isWet(grid, i, j)) continue;
      const square = (variable: 'u' | 'v', column: number, row: number) =>
        valueAt(model, variable, column % (periodic ? nx : nx + 1), row) ** 2;
      // With h_u and h_v the means of A_c h over A_u and A_v, the head that goes with their energies has no area in it.
      const kinetic = (square('u', i, j) + square('u', i + 1, j) + square('v', i, j) + square('v', i, j + 1)) / 4;
      const outflow = fluxU(i + 1, j) - fluxU(i, j) + fluxV(i, j + 1) - fluxV(i, j);
      const work = (g * etaAt(model, i, j) + kinetic) * outflow;
      potential += work;
      size += Math.abs(work);
    }
  stepModel(model, true);
  const { terms } = model.sums;
  let momentum = 0;
  for (let j = 0; j <= ny; j++)
    momentum += dxV[j] * dy * terms['kineticV'][j] + (j < ny ? area(j) * terms['kineticU'][j] : 0);
  return Math.abs(momentum - potential) / size;
}

/** Change of the volume in a hundred steps over the volume. */
function massChange(seed: number, periodic: boolean, band: boolean): number {
  const grid = randomGrid(seed, periodic, band);
  const model = nonlinearModel({ grid, dt: 300, viscosity: 2e4 });
  const random = noise(seed + 200);
  setState(model, { eta: () => 20 * random(), u: () => 0.2 * random(), v: () => 0.2 * random() });
  const volume = () => {
    let sum = 0;
    for (let j = 0; j < grid.ny; j++)
      for (let i = 0; i < grid.nx; i++) sum += grid.dxC[j] * grid.dy * thickness(model, i, j);
    return sum;
  };
  const before = volume();
  advance(model, 100);
  return Math.abs(volume() / before - 1);
}

const cases = [1, 2, 3, 4, 5].flatMap((seed) => [false, true].map((periodic) => ({ seed, periodic })));

describe('nonlinear conservation with any coast', () => {
  for (const [where, band] of [
    ['a plane', false],
    ['a latitude band', true],
  ] as const)
    it(`mass and energy on ${where}, ten random coasts, closed and periodic`, (context) => {
      const worst = (of: typeof energySource) =>
        cases.reduce((most, { seed, periodic }) => Math.max(most, of(seed, periodic, band)), 0);
      for (const [name, obtained] of [
        ['source of energy', worst(energySource)],
        ['change of mass in 100 steps', worst(massChange)],
      ] as const)
        proveCase(context, 'u', {
          id: `nonlinear ${name} on ${where}`,
          quantity: `nonlinear: ${name} on ${where}, over its size, largest of ten`,
          expected: 0,
          obtained,
          kind: 'absolute',
          tolerance: 1e-14,
          resolution: '17 × 13 cells, random land',
        });
    });
});

describe('uniform potential vorticity', () => {
  const [nx, ny, dx] = [24, 20, 5e4];
  const grid = planeGrid({ nx, ny, dx, dy: dx, f: (y) => 5e-5 + 2e-11 * y, beta: 2e-11 });
  const Q = 6e-5 / H;
  const corners = (model: Model, at: (q: number, i: number, j: number) => void) => {
    for (let j = 1; j < ny; j++)
      for (let i = 1; i < nx; i++) {
        const [v, w] = [valueAt(model, 'v', i, j), valueAt(model, 'v', i - 1, j)];
        const zeta = (v - w - valueAt(model, 'u', i, j) + valueAt(model, 'u', i, j - 1)) / dx;
        const mean =
          (thickness(model, i - 1, j - 1) +
            thickness(model, i, j - 1) +
            thickness(model, i - 1, j) +
            thickness(model, i, j)) /
          4;
        at((grid.f[j] + zeta) / mean, i, j);
      }
  };

  it('stays uniform at every corner off the coast', (context) => {
    const model = nonlinearModel({ grid, dt: 2000 });
    const random = noise(5);
    const eta = Array.from({ length: ny }, () => Array.from({ length: nx }, () => 10 * random()));
    const v = Array.from({ length: ny + 1 }, () => Array.from({ length: nx }, () => 0.05 * random()));
    // Row by row from the south: ζ = Q h_q − f gives u of each row from that of the row before.
    const u = Array.from({ length: ny }, () => new Array<number>(nx + 1).fill(0));
    for (let j = 1; j < ny; j++)
      for (let i = 1; i < nx; i++) {
        const mean = H + (eta[j - 1][i - 1] + eta[j - 1][i] + eta[j][i - 1] + eta[j][i]) / 4;
        u[j][i] = u[j - 1][i] + v[j][i] - v[j][i - 1] - (Q * mean - grid.f[j]) * dx;
      }
    setState(model, { eta: (i, j) => eta[j][i], u: (i, j) => u[j][i], v: (i, j) => v[j][i] });
    let largest = 0;
    const miss = () => {
      let worst = 0;
      corners(model, (q) => (worst = Math.max(worst, Math.abs(q / Q - 1))));
      return worst;
    };
    expect(miss()).toBeLessThan(1e-13);
    let moved = 0;
    const before = valueAt(model, 'h', 5, 5);
    for (let n = 0; n < 100; n++) {
      advance(model);
      largest = Math.max(largest, miss());
      moved = Math.max(moved, Math.abs(valueAt(model, 'h', 5, 5) - before));
    }
    expect(moved).toBeGreaterThan(1); // it is a flow, not a rest
    proveCase(context, 'u', {
      id: 'uniform potential vorticity',
      quantity: 'nonlinear: largest departure of (f + ζ)/h from uniform in 100 steps, relative',
      expected: 0,
      obtained: largest,
      kind: 'absolute',
      tolerance: 1e-12,
      resolution: '24 × 20 cells, random thickness',
    });
  });
});
