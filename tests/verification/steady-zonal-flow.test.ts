import { describe, expect, it } from 'vitest';
import { etaAt, planeGrid, setState, valueAt, type Grid, type Model } from '@halfdeep/ocean';
import { advance, nonlinearModel, order, stepsFor } from './common';
import { convergencePlate, profilePlate } from './plates';
import { proveCase } from './record';

// Case l. Test case 2 of Williamson et al. (1992), J. Comput. Phys. 102, 211–224, between free-slip walls at ±60°:
// u = u0 cos φ, h = h0 − (aΩu0 + u0²/2) sin²φ/g, steady for the nonlinear equations on the sphere.
const RADIUS = 6.37122e6;
const ROTATION = 7.292e-5;
const GRAVITY = 9.80616;
const H0 = 2.94e4 / GRAVITY;
const U0 = (2 * Math.PI * RADIUS) / (12 * 86_400);
const DAYS = 5;

const thickness = (phi: number) => H0 - ((RADIUS * ROTATION * U0 + (U0 * U0) / 2) * Math.sin(phi) ** 2) / GRAVITY;

/** A band of the sphere between ±60° with cells of so many degrees; longitude periodic after `nx` of them. */
function band(degrees: number, nx: number): { grid: Grid; centre: Float64Array; face: Float64Array } {
  const ny = Math.round(120 / degrees);
  const step = (degrees / 180) * Math.PI;
  const dy = RADIUS * step;
  const grid = planeGrid({ nx, ny, dx: dy, dy, y0: (-ny / 2) * dy, periodic: true, f: () => 0, beta: 2.3e-11 });
  const centre = grid.yCentre.map((y) => y / RADIUS);
  const face = grid.yFace.map((y) => y / RADIUS);
  centre.forEach((phi, j) => (grid.dxC[j] = RADIUS * Math.cos(phi) * step));
  face.forEach((phi, j) => {
    grid.dxV[j] = RADIUS * Math.cos(phi) * step;
    grid.f[j] = 2 * ROTATION * Math.sin(phi);
  });
  return { grid, centre, face };
}

interface Flow {
  l2: number;
  /** Largest |v|, and largest difference between columns of a row, over u0. */
  largestV: number;
  asymmetry: number;
  /** Latitude, and h found less exact, m. */
  latitude: number[];
  miss: number[];
}

function run(degrees: number, nx: number): Flow {
  const { grid, centre } = band(degrees, nx);
  const c = Math.sqrt(GRAVITY * H0);
  // S(1 + 2 Fr) = 0.75 on the poleward row.
  const gravity = 0.75 / (1 + (2 * U0) / c) / (c * Math.sqrt(1 / grid.dxC[0] ** 2 + 1 / grid.dy ** 2));
  const { steps, dt } = stepsFor(DAYS * 86_400, Math.min(gravity, 0.4 / Math.abs(grid.f[0])));
  const model: Model = nonlinearModel({ grid, dt, reducedGravity: GRAVITY, restThickness: H0 });
  setState(model, { eta: (_i, j) => thickness(centre[j]) - H0, u: (_i, j) => U0 * Math.cos(centre[j]) });
  advance(model, steps);
  let [squares, size, largestV, asymmetry] = [0, 0, 0, 0];
  for (let j = 0; j < grid.ny; j++)
    for (let i = 0; i < nx; i++) {
      const exact = thickness(centre[j]);
      squares += grid.dxC[j] * (etaAt(model, i, j) + H0 - exact) ** 2;
      size += grid.dxC[j] * exact ** 2;
      largestV = Math.max(largestV, Math.abs(valueAt(model, 'v', i, j)));
      asymmetry = Math.max(asymmetry, Math.abs(valueAt(model, 'u', i, j) - valueAt(model, 'u', 0, j)));
    }
  return {
    l2: Math.sqrt(squares / size),
    largestV: largestV / U0,
    asymmetry: asymmetry / U0,
    latitude: Array.from(centre, (phi) => (phi / Math.PI) * 180),
    miss: Array.from(centre, (phi, j) => etaAt(model, 0, j) + H0 - thickness(phi)),
  };
}

describe('steady zonal flow in a latitude band (Williamson et al. 1992, test case 2)', () => {
  const [coarse, middle, fine] = [5, 2.5, 1.25].map((degrees) => run(degrees, 4));

  it('stays: l2(h) below 8e-5 after five days at 2.5°, second order', (context) => {
    proveCase(context, 'l', {
      id: 'thickness',
      quantity: 'h after five days, l2 error',
      expected: 0,
      obtained: middle.l2,
      kind: 'L2',
      tolerance: 8e-5,
      order: order(middle.l2, fine.l2),
      orderRange: [1.85, 2.2],
      resolution: '2.5°; order from 2.5° and 1.25°',
      plate: convergencePlate(
        'Error of the thickness after five days of steady zonal flow against the spacing.',
        'spacing, degrees',
        [5, 2.5, 1.25],
        [{ name: 'h, l2', values: [coarse.l2, middle.l2, fine.l2] }],
      ),
    });
    expect(order(coarse.l2, middle.l2)).toBeGreaterThan(1.8);
  });
  it('has hardly any flow across latitudes', (context) => {
    proveCase(context, 'l', {
      id: 'meridional',
      quantity: 'largest |v| over u0',
      expected: 0,
      obtained: middle.largestV,
      kind: 'absolute',
      tolerance: 2e-3,
      resolution: '2.5°',
      plate: profilePlate(
        'Thickness found less exact after five days, at 2.5° and 1.25°.',
        ['latitude, degrees', 'h found − exact, m'],
        [
          { name: '2.5°', role: 'found', x: middle.latitude, y: middle.miss },
          { name: '1.25°', role: 'found', x: fine.latitude, y: fine.miss },
        ],
      ),
    });
  });
  it('stays the same at every longitude', (context) => {
    const round = run(2.5, 144);
    proveCase(context, 'l', {
      id: 'symmetry',
      quantity: 'largest difference of u between longitudes over u0, 144 columns',
      expected: 0,
      obtained: round.asymmetry,
      kind: 'absolute',
      tolerance: 1e-12,
      resolution: '2.5°, 144 × 48 cells',
    });
    expect(Math.abs(round.l2 / middle.l2 - 1)).toBeLessThan(1e-9);
  });
});
