import { describe, expect, it } from 'vitest';
import { forcingFromFunctions, planeGrid, setState, valueAt } from '@halfdeep/ocean';
import { advance, beta, commonModel, commonStep, DAY, H, L, order, relativeL2, rho0, stepsFor } from './common';
import { convergencePlate, profilePlate } from './plates';
import { proveCase } from './record';

// Case i. Equatorial jet under uniform eastward wind: Yoshida (1959). With y in units of L,
// u_t/F = 1 − (y²/2) ∫₀¹ (1 − m²)^{−1/4} e^{−m y²/2} dm, F = τ/(ρ0 H).
const TAU = 0.05;
const F = TAU / (rho0 * H);

/** The integral with m = sin θ: ∫ √(cos θ) e^{−y² sin θ/2} dθ over 0 … π/2, smooth after θ = π/2 − s², by Gauss–Legendre. */
function acceleration(y: number): number {
  // m = cos(s²): dm = 2 s sin(s²) ds and (1 − m²)^{−1/4} = sin(s²)^{−1/2}; the integrand is smooth on 0 … √(π/2).
  const end = Math.sqrt(Math.PI / 2);
  const { nodes, weights } = gaussLegendre(60);
  let integral = 0;
  for (let k = 0; k < nodes.length; k++) {
    const s = (end / 2) * (nodes[k] + 1);
    const angle = s * s;
    integral += weights[k] * (end / 2) * 2 * s * Math.sqrt(Math.sin(angle)) * Math.exp((-Math.cos(angle) * y * y) / 2);
  }
  return 1 - (y * y * integral) / 2;
}

/** Gauss–Legendre nodes and weights on [−1, 1] by Newton's method: Abramowitz & Stegun (1964), 25.4.29 (from memory). */
function gaussLegendre(n: number): { nodes: number[]; weights: number[] } {
  const nodes: number[] = [];
  const weights: number[] = [];
  for (let k = 1; k <= n; k++) {
    let x = Math.cos((Math.PI * (k - 0.25)) / (n + 0.5));
    let slope = 0;
    for (let round = 0; round < 30; round++) {
      let [before, now] = [1, x];
      for (let m = 2; m <= n; m++) [before, now] = [now, ((2 * m - 1) * x * now - (m - 1) * before) / m];
      slope = (n * (x * now - before)) / (x * x - 1);
      const shift = now / slope;
      x -= shift;
      if (Math.abs(shift) < 1e-15) break;
    }
    nodes.push(x);
    weights.push(2 / ((1 - x * x) * slope * slope));
  }
  return { nodes, weights };
}

interface Jet {
  /** Mean u_t/F between days 45 and 65 on the rows within 4 L. */
  y: number[];
  found: number[];
  exact: number[];
  l2: number;
}

function run(perL: number): Jet {
  const dy = L / perL;
  const grid = planeGrid({
    nx: 4,
    ny: 16 * perL,
    dx: dy,
    dy,
    y0: -8 * L,
    periodic: true,
    f: (y) => beta * y,
    beta,
  });
  const { steps: perDay, dt } = stepsFor(DAY, commonStep(grid));
  const forcing = forcingFromFunctions(grid, [
    {
      taux: () => TAU,
      factor: (step) => Math.sin((Math.PI / 2) * Math.min(1, ((step + 0.5) * dt) / (40 * DAY))) ** 2,
    },
  ]);
  const model = commonModel({ grid, dt, forcing });
  setState(model, {});
  const rows = Array.from({ length: 8 * perL }, (_, k) => 4 * perL + k);
  const speeds = () => rows.map((j) => valueAt(model, 'u', 1, j));
  advance(model, 45 * perDay);
  const before = speeds();
  advance(model, 20 * perDay);
  const found = speeds().map((u, k) => (u - before[k]) / (20 * DAY * F));
  const y = rows.map((j) => grid.yCentre[j] / L);
  const exact = y.map(acceleration);
  return { y, found, exact, l2: relativeL2(found, exact) };
}

describe('Yoshida jet (Yoshida 1959)', () => {
  const [coarse, middle, fine] = [2, 4, 8].map(run);

  it('the integral has the independently computed figures', () => {
    for (const [y, expected] of [
      [0, 1],
      [1, 0.541229],
      [2, 0.056431],
    ])
      expect(Math.abs(acceleration(y) - expected), `y = ${y} L`).toBeLessThan(1e-6);
  });
  it('accelerates as the integral says: L2 error below 1.5 % at L/4, second order', (context) => {
    proveCase(context, 'i', {
      id: 'profile',
      quantity: 'u_t ρ0 H/τ within 4 L of the equator, L2 error',
      expected: 0,
      obtained: middle.l2,
      kind: 'L2',
      tolerance: 0.015,
      order: order(middle.l2, fine.l2),
      orderRange: [1.85, 2.15],
      resolution: 'dy = L/4; order from L/4 and L/8',
      plate: convergencePlate(
        'L2 error of the acceleration of the Yoshida jet against the spacing.',
        'spacing, L',
        [1 / 2, 1 / 4, 1 / 8],
        [{ name: 'u_t, L2', values: [coarse.l2, middle.l2, fine.l2] }],
      ),
    });
  });
  it('accelerates on the rows next to the equator as the wind alone would, but for (y/L)²', (context) => {
    const nearest = fine.y.findIndex((y) => y > 0);
    proveCase(context, 'i', {
      id: 'equator',
      quantity: 'u_t ρ0 H/τ at L/16 from the equator',
      expected: acceleration(1 / 16),
      obtained: fine.found[nearest],
      tolerance: 5e-3,
      resolution: 'dy = L/8',
      plate: profilePlate(
        'Acceleration of the jet over that of the wind, found at L/8 and by the integral.',
        ['northward, L', 'u_t ρ0 H/τ'],
        [
          { name: 'integral', role: 'expected', x: fine.y, y: fine.exact },
          { name: 'found', role: 'found', x: fine.y, y: fine.found },
        ],
      ),
    });
  });
});
