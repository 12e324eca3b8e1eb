import { Matrix, solve } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import { forcingFromFunctions, planeGrid, setState, valueAt, type Model } from '@halfdeep/ocean';
import { advance, commonModel, commonStep, DAY, H, order, relativeL2, rho0, stepsFor } from './common';
import { BETA, largestTransport, SIDE, TAU0 } from './gyre';
import { convergencePlate, profilePlate } from './plates';
import { proveCase } from './record';
import { chebyshev, setRow } from './spectral';

// Cases f and f′. Wind-driven gyre with Laplacian viscosity: Munk (1950), J. Meteorol. 7, 79–93. ψ = X(x) sin(ly) with
// A(X″″ − 2l²X″ + l⁴X) − βX′ = F and X = X′ = 0 (no slip) or X = X″ = 0 (free slip) in the west and east; the walls in
// the north and south are free slip, where ψ = ψ_yy = 0.
const A = 2000;
const l = Math.PI / SIDE;

/**
 * X and X′ by Chebyshev collocation of X″ − l²X = W, A(W″ − l²W) − βX′ = F, which is the same equation in two of second
 * order; free slip is W = 0 on the walls.
 */
function munk(slip: 'none' | 'free'): { psi: (x: number) => number; v: (x: number) => number } {
  const { count, D, interpolate } = chebyshev(160, 0, SIDE);
  const F = (TAU0 * l) / (rho0 * H);
  const second = D.mmul(D);
  const operator = Matrix.zeros(2 * count, 2 * count);
  const right = Matrix.zeros(2 * count, 1);
  // W is solved for in units that make both halves of the same size.
  const unit = l * l;
  for (let i = 0; i < count; i++) {
    for (let k = 0; k < count; k++) {
      const helmholtz = second.get(i, k) - (i === k ? l * l : 0);
      operator.set(i, k, helmholtz / unit);
      operator.set(count + i, count + k, (A * helmholtz * unit) / (BETA * l));
      operator.set(count + i, k, -D.get(i, k) / l);
    }
    operator.set(i, count + i, -1);
    right.set(count + i, 0, F / (BETA * l));
  }
  for (const wall of [0, count - 1]) {
    setRow(operator, right, wall, (k) => (k === wall ? 1 : 0));
    setRow(operator, right, count + wall, (k) =>
      slip === 'free' ? (k === count + wall ? 1 : 0) : k < count ? D.get(wall, k) / l : 0,
    );
  }
  const X = solve(operator, right).subMatrix(0, count - 1, 0, 0);
  return { psi: interpolate(X.to1DArray()), v: interpolate(D.mmul(X).to1DArray()) };
}

/** Runs the gyre from rest and returns it when it is steady. */
function runMunk(dx: number, slip: 'none' | 'free', years: number): Model {
  const n = SIDE / dx;
  const grid = planeGrid({ nx: n, ny: n, dx, dy: dx, f: (y) => 1e-5 + BETA * y, beta: BETA });
  const forcing = forcingFromFunctions(grid, [{ taux: (_x, y) => -TAU0 * Math.cos((Math.PI * y) / SIDE) }]);
  const { steps, dt } = stepsFor(years * 365 * DAY, commonStep(grid));
  // Stress is A s ζ: with A = 0 at the corners of the northern and southern wall these are free slip, whatever the rest.
  const corner = new Float64Array((n + 1) * (n + 1)).fill(A);
  corner.fill(0, 0, n + 1);
  corner.fill(0, n * (n + 1));
  const viscosityMap = { cell: new Float64Array(n * n).fill(A), corner };
  const model = commonModel({ grid, dt, forcing, slip, viscosityMap });
  setState(model, {});
  advance(model, steps);
  return model;
}

interface Gyre {
  /** Sv, m/s. */
  transport: number;
  largestV: number;
  /** L2 error of ψ. */
  psi: number;
  across: number[];
}

function measure(dx: number, slip: 'none' | 'free', exact: (x: number) => number): Gyre {
  const model = runMunk(dx, slip, YEARS);
  const { grid } = model;
  const found: number[] = [];
  const expected: number[] = [];
  let largestV = 0;
  const columns = Array.from({ length: grid.nx }, (_, i) => exact((i + 1) * dx));
  for (let j = 1; j < grid.ny; j++) {
    let psi = 0;
    for (let i = 0; i < grid.nx; i++) {
      const v = valueAt(model, 'v', i, j);
      largestV = Math.max(largestV, v);
      psi += v * dx;
      found.push(psi);
      expected.push(columns[i] * Math.sin(l * j * dx));
    }
  }
  return {
    transport: largestTransport(model) / 1e6,
    largestV,
    psi: relativeL2(found, expected),
    across: Array.from({ length: grid.nx }, (_, i) => valueAt(model, 'v', i, grid.ny / 2)),
  };
}

const YEARS = 3;

describe.each([
  { id: 'f', slip: 'none', transportSv: 8.055243, speed: 0.53675, psi: 0.02, v: 0.05 },
  { id: "f'", slip: 'free', transportSv: 9.482561, speed: 1.023935, psi: 0.01, v: 0.05 },
] as const)('Munk gyre (Munk 1950), slip $slip', ({ id, slip, transportSv, speed, psi, v }) => {
  const exact = munk(slip);
  const spacings = [100, 50, 25];
  const runs = spacings.map((dx) => measure(dx * 1e3, slip, exact.psi));
  const fine = runs[2];

  it('the boundary-value problem has the independently computed figures', () => {
    let [largestPsi, largestV] = [0, 0];
    for (let x = 0; x <= SIDE; x += 50) {
      largestPsi = Math.max(largestPsi, exact.psi(x));
      largestV = Math.max(largestV, exact.v(x));
    }
    expect(Math.abs((largestPsi * H) / 1e6 - transportSv)).toBeLessThan(2e-6);
    expect(Math.abs(largestV - speed)).toBeLessThan(2e-6);
  });
  it('has the shape of the solution, at second order', (context) => {
    proveCase(context, id, {
      id: 'shape',
      quantity: 'streamfunction, L2 error',
      expected: 0,
      obtained: fine.psi,
      kind: 'L2',
      tolerance: psi,
      order: order(runs[1].psi, fine.psi),
      orderRange: [1.8, 2.3],
      resolution: 'dx = 25 km; order from 50 and 25 km',
      plate: convergencePlate(
        `L2 error of the streamfunction of the Munk gyre against the spacing, ${slip === 'none' ? 'no slip' : 'free slip'}.`,
        'spacing, km',
        spacings,
        [{ name: 'ψ, L2', values: runs.map((run) => run.psi) }],
      ),
    });
  });
  it('carries the transport of the solution', (context) => {
    proveCase(context, id, {
      id: 'transport',
      quantity: 'largest transport, Sv',
      expected: transportSv,
      obtained: fine.transport,
      tolerance: psi,
      resolution: 'dx = 25 km',
    });
  });
  it('has the current of the solution', (context) => {
    // Where the wall layer is widest: at v points, half a cell from the wall.
    const points = Array.from({ length: SIDE / 25e3 }, (_, i) => (i + 0.5) * 25e3);
    proveCase(context, id, {
      id: 'current',
      quantity: 'largest v at the points of the grid, m/s',
      expected: points.reduce((most, x) => Math.max(most, exact.v(x)), 0),
      obtained: fine.largestV,
      tolerance: v,
      resolution: 'dx = 25 km',
      plate: profilePlate(
        'Northward velocity across the middle of the Munk gyre, western 600 km, found at 25 km and exact.',
        ['eastward, km', 'v, m/s'],
        [
          {
            name: 'exact',
            role: 'expected',
            x: Array.from({ length: 121 }, (_, k) => 5 * k),
            y: Array.from({ length: 121 }, (_, k) => exact.v(5e3 * k)),
          },
          { name: 'found', role: 'found', x: points.slice(0, 24).map((x) => x / 1e3), y: fine.across.slice(0, 24) },
        ],
      ),
    });
  });
});
