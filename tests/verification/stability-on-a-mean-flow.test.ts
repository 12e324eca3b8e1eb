import { describe, it } from 'vitest';
import { etaAt, planeGrid, setState, valueAt, type Model } from '@halfdeep/ocean';
import { advance, c, g, H, noise, nonlinearModel } from './common';
import { proveCase } from './record';

// Case t, mean flow. Stability of the nonlinear step on a uniform zonal current, from the von Neumann analysis of
// numerics.md §5 without rotation: noise for 4000 steps, stable below and blown up above. Preflight keeps S(1 + 2 Fr)
// below 0.91, well on the safe side of each.
const CELLS = 40;
const STEPS = 4000;
const DX = 5e4;

/** g′η² + H ((u − U)² + v²), summed. */
function departure(model: Model, U: number): number {
  let sum = 0;
  for (let j = 0; j < CELLS; j++)
    for (let i = 0; i < CELLS; i++) {
      const [eta, u, v] = [etaAt(model, i, j), valueAt(model, 'u', i, j) - U, valueAt(model, 'v', i, j)];
      sum += g * eta * eta + H * (u * u + v * v);
    }
  return sum;
}

/** Energy of the departure from the current after 4000 steps over that before; 1e12 for what blew up. */
function growth(froude: number, S: number): number {
  const grid = planeGrid({ nx: CELLS, ny: CELLS, dx: DX, dy: DX, periodic: true, f: () => 0 });
  const U = froude * c;
  const model = nonlinearModel({ grid, dt: (S * DX) / (Math.SQRT2 * c) });
  const random = noise(11);
  setState(model, { eta: () => 0.1 * random(), u: () => U + 1e-3 * random(), v: () => 1e-3 * random() });
  const before = departure(model, U);
  for (let step = 0; step < STEPS; step += 200) {
    advance(model, 200);
    if (!(departure(model, U) < 1e12 * before)) return 1e12;
  }
  return departure(model, U) / before;
}

describe('stability on a mean flow', () => {
  for (const [froude, below, above] of [
    [0.1, 0.82, 0.87],
    [0.2, 0.72, 0.78],
    [0.5, 0.55, 0.62],
  ] as const)
    it(`Fr = ${froude}`, (context) => {
      proveCase(context, 't', {
        id: `Fr = ${froude}, below`,
        quantity: `nonlinear, Fr = ${froude}, S = ${below}: energy of noise after 4000 steps over before, at most`,
        expected: 1,
        obtained: growth(froude, below),
        kind: 'atMost',
        resolution: '40 × 40 cells of noise on a zonal current',
      });
      proveCase(context, 't', {
        id: `Fr = ${froude}, above`,
        quantity: `nonlinear, Fr = ${froude}, S = ${above}: energy of noise after 4000 steps over before, at least`,
        expected: 100,
        obtained: growth(froude, above),
        kind: 'atLeast',
        resolution: '40 × 40 cells of noise on a zonal current',
      });
    });
});
