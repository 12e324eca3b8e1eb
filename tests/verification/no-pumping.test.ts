import { Matrix, solve } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import { forcingFromFunctions, planeGrid, setState, valueAt, type Grid } from '@halfdeep/ocean';
import {
  advance,
  beta,
  c,
  commonModel,
  commonStep,
  DAY,
  g,
  H,
  harmonicOf,
  L,
  order,
  rho0,
  stepsFor,
  T,
} from './common';
import { convergencePlate, profilePlate } from './plates';
import { proveCase } from './record';
import { chebyshev, setRow } from './spectral';

// Case h. Wind stress linear in latitude about the equator, τx = a y: its Ekman pumping is zero, its Ekman and Sverdrup
// transports are the same, V = −a/(ρ0 β), the equator included (common practice; derived for this project).
const A = 0.05 / 1.5e6;
const PER_WIDTH = -A / (rho0 * beta); // m²/s
const V_SVERDRUP = PER_WIDTH / H;
const PERIOD = 365.25 * DAY;

/**
 * V(y) of −ω²V − V″ + y²V = −y², V = 0 at ±half (units L, T), by Chebyshev collocation. Returns V and V′ at any y.
 */
function seasonal(omega: number, half: number): { V: (y: number) => number; dV: (y: number) => number } {
  const { count, nodes, D, interpolate } = chebyshev(96, -half, half);
  const operator = D.mmul(D).neg();
  const right = Matrix.zeros(count, 1);
  for (let i = 0; i < count; i++) {
    const y = nodes[i];
    operator.set(i, i, operator.get(i, i) + y * y - omega * omega);
    right.set(i, 0, -y * y);
  }
  for (const wall of [0, count - 1]) setRow(operator, right, wall, (k) => (k === wall ? 1 : 0));
  const V = solve(operator, right);
  return { V: interpolate(V.to1DArray()), dV: interpolate(D.mmul(V).to1DArray()) };
}

/** A zonally uniform channel with walls at ±half L and `perL` rows in L. */
function channel(perL: number, half: number): Grid {
  const dy = L / perL;
  return planeGrid({
    nx: 4,
    ny: 2 * half * perL,
    dx: dy,
    dy,
    y0: -half * L,
    periodic: true,
    f: (y) => beta * y,
    beta,
  });
}

interface SeasonErrors {
  v: number;
  u: number;
  eta: number;
}

/** Runs one period of τx = a y cos ωt from the exact state and returns relative errors of the amplitudes. */
function seasonalErrors(perL: number, half: number): SeasonErrors {
  const grid = channel(perL, half);
  const omega = (2 * Math.PI) / PERIOD;
  const { V, dV } = seasonal(omega * T, half);
  const { steps, dt } = stepsFor(PERIOD, commonStep(grid));
  const forcing = forcingFromFunctions(grid, [
    { taux: (_x, y) => A * y, factor: (step) => Math.cos((2 * Math.PI * (step + 0.5)) / steps) },
  ]);
  const model = commonModel({ grid, dt, forcing });
  const speed = -V_SVERDRUP;
  setState(model, { v: (_i, j) => (j === 0 || j === grid.ny ? 0 : speed * V(grid.yFace[j] / L)) });
  const rows = Array.from({ length: grid.ny }, (_, j) => j);
  const series = {
    v: rows.map(() => new Float64Array(steps)),
    u: rows.map(() => new Float64Array(steps)),
    eta: rows.map(() => new Float64Array(steps)),
  };
  for (let n = 0; n < steps; n++) {
    for (const j of rows) {
      series.v[j][n] = valueAt(model, 'v', 1, j);
      series.u[j][n] = valueAt(model, 'u', 1, j);
      series.eta[j][n] = valueAt(model, 'h', 1, j);
    }
    advance(model);
  }
  const phase = (n: number) => (2 * Math.PI * n) / steps;
  const within = (y: number) => Math.abs(y) <= 3 * L;
  const worst = (found: (j: number) => number, exact: (j: number) => number, y: Float64Array) => {
    let error = 0;
    let size = 0;
    for (const j of rows.filter((row) => within(y[row]))) {
      error = Math.max(error, Math.abs(found(j) - exact(j)));
      size = Math.max(size, Math.abs(exact(j)));
    }
    return error / size;
  };
  return {
    v: worst(
      (j) => harmonicOf(series.v[j], phase).cos,
      (j) => speed * V(grid.yFace[j] / L),
      grid.yFace,
    ),
    u: worst(
      (j) => harmonicOf(series.u[j], phase).sin,
      (j) => (speed * (grid.yCentre[j] / L) * (V(grid.yCentre[j] / L) + 1)) / (omega * T),
      grid.yCentre,
    ),
    eta: worst(
      (j) => harmonicOf(series.eta[j], phase).sin,
      (j) => ((c / g) * speed * -dV(grid.yCentre[j] / L)) / (omega * T),
      grid.yCentre,
    ),
  };
}

describe('wind without pumping, τx = a y', () => {
  it('the spectral reference gives the independently computed figures', () => {
    const omega = ((2 * Math.PI) / PERIOD) * T;
    const { V, dV } = seasonal(omega, 8);
    // V(0, L, 2L)/vs; amplitudes of u at L/2, L, 2L and of η at L, 2L, printed to six and five digits.
    expect(V(0) / -1).toBeCloseTo(1.000905, 6);
    expect(V(1) / -1).toBeCloseTo(1.000625, 6);
    expect(V(2) / -1).toBeCloseTo(1.000241, 6);
    const u = (y: number) => Math.abs((V_SVERDRUP * y * (V(y) + 1)) / omega);
    for (const [y, amplitude] of [
      [0.5, 1.4178e-4],
      [1, 2.1527e-4],
      [2, 1.661e-4],
    ])
      expect(Math.abs(u(y) / amplitude - 1)).toBeLessThan(1e-4);
    const eta = (y: number) => Math.abs(((c / g) * V_SVERDRUP * dV(y)) / omega);
    expect(Math.abs(eta(1) / 9.6471e-3 - 1)).toBeLessThan(1e-4);
    expect(Math.abs(eta(2) / 5.6756e-3 - 1)).toBeLessThan(1e-4);
  });

  it('the seasonal response is exact: v to 1e-4, u and η to 1 % at L/8, second order', (context) => {
    const coarse = seasonalErrors(8, 8);
    const fine = seasonalErrors(16, 8);
    const resolution = 'dy = L/8; order from L/8 and L/16';
    for (const [id, tolerance] of [
      ['v', 1e-4],
      ['u', 0.01],
      ['eta', 0.01],
    ] as const)
      proveCase(context, 'h', {
        id: `season-${id}`,
        quantity: `seasonal ${id === 'eta' ? 'η' : id} within 3 L, largest error over largest value`,
        expected: 0,
        obtained: coarse[id],
        kind: 'absolute',
        tolerance,
        ...(id !== 'v' && { order: order(coarse[id], fine[id]), orderRange: [1.7, 2.3] as [number, number] }),
        resolution: id === 'v' ? 'dy = L/8' : resolution,
        ...(id === 'u' && {
          plate: convergencePlate(
            'Errors of the seasonal response to τx = a y against the spacing.',
            'spacing, L',
            [1 / 8, 1 / 16],
            [
              { name: 'u', values: [coarse.u, fine.u] },
              { name: 'η', values: [coarse.eta, fine.eta] },
            ],
          ),
        }),
      });
  });

  it('switched on abruptly, V(0) grows as computed independently up to 3 T', (context) => {
    const grid = channel(8, 8);
    const { steps: perHalf, dt } = stepsFor(T / 2, commonStep(grid) / 2);
    const model = commonModel({ grid, dt, forcing: forcingFromFunctions(grid, [{ taux: (_x, y) => A * y }]) });
    setState(model, {});
    const expected: Record<number, number> = { 0.5: 0.00521, 1: 0.08264, 1.5: 0.40438, 2: 1.16479, 3: 3.26279 };
    for (let half = 1; half <= 6; half++) {
      advance(model, perHalf);
      if (!(half / 2 in expected)) continue;
      proveCase(context, 'h', {
        id: `switched-on-${half / 2}`,
        quantity: `V(0) over −a/(ρ0 β) at ${half / 2} T after an abrupt start`,
        expected: expected[half / 2],
        obtained: valueAt(model, 'v', 1, grid.ny / 2) / V_SVERDRUP,
        kind: 'absolute',
        tolerance: 0.01 * expected[half / 2] + 2e-4,
        resolution: 'dy = L/8',
      });
    }
  });

  describe('in a closed basin of 8000 × 4000 km with r = 1e-6', () => {
    const dx = 50e3;
    const grid = planeGrid({ nx: 160, ny: 80, dx, dy: dx, y0: -2e6, f: (y) => beta * y, beta });
    const { steps, dt } = stepsFor(365 * DAY, commonStep(grid));
    const forcing = forcingFromFunctions(grid, [{ taux: (_x, y) => A * y }]);
    const model = commonModel({ grid, dt, rayleigh: 1e-6, forcing });
    setState(model, {});
    const across = (j: number, from: number, to: number) => {
      let sum = 0;
      for (let i = from; i < to; i++) sum += valueAt(model, 'v', i, j);
      return sum * H * dx;
    };
    const equator = grid.ny / 2;
    const at60: number[] = [];
    let along: number[] = [];
    let netBefore = NaN;
    const day60 = Math.round((60 * DAY) / dt);
    for (let n = 1; n <= steps; n++) {
      advance(model);
      if (n === steps - Math.round((30 * DAY) / dt)) netBefore = across(equator, 0, grid.nx);
      // The middle of the basin: by day 60 neither wall's signal matters there.
      if (n === day60) along = Array.from({ length: 146 }, (_, i) => valueAt(model, 'v', i + 14, equator) * H);
      if (n === day60) for (const j of [equator, equator + 7, equator + 14]) at60.push(across(j, 60, 100) / (40 * dx));
    }
    const net = across(equator, 0, grid.nx);

    it('the interior carries V = −a/(ρ0 β) = −1.413927 m²/s by day 60, to 5 %, the equator included', (context) => {
      expect(Math.abs(PER_WIDTH - -1.413927)).toBeLessThan(1e-6);
      at60.forEach((found, k) =>
        proveCase(context, 'h', {
          id: `interior-${k}`,
          quantity: `V ${['on the equator', '350 km north', '700 km north'][k]} on day 60, m²/s`,
          expected: -1.413927,
          obtained: found,
          tolerance: 0.05,
          resolution: 'dx = 50 km, closed basin',
          ...(k === 0 && {
            plate: profilePlate(
              'Northward transport per width along the equator on day 60, and −a/(ρ0 β).',
              ['eastward, km', 'V, m²/s'],
              [
                { name: '−a/(ρ0 β)', role: 'expected', x: [0, 8000], y: [PER_WIDTH, PER_WIDTH] },
                // The western boundary current, a hundred times as strong, is left out.
                { name: 'found', role: 'found', x: along.map((_v, i) => 50 * (i + 14.5)), y: along },
              ],
            ),
          }),
        }),
      );
    });
    it('a western boundary current brings it all back: 4 % of V Lx are missing after a year, and ever less', (context) => {
      // 4.3 % by this measure, the net transport over V Lx, and falling by 7 % in ten days as the gyre fills.
      proveCase(context, 'h', {
        id: 'return',
        quantity: 'net transport across the equator after a year over V Lx',
        expected: 0,
        obtained: net / (PER_WIDTH * 8e6),
        kind: 'absolute',
        tolerance: 0.045,
        resolution: 'dx = 50 km, closed basin',
      });
      expect(Math.abs(net)).toBeLessThan(0.85 * Math.abs(netBefore));
    });
  });
});
