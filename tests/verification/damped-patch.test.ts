import { Matrix, solve } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import { forcingFromFunctions, planeGrid, richardson, setState, valueAt } from '@halfdeep/ocean';
import { advance, beta, c, commonModel, commonStep, g, H, L, order, relativeL2, rho0, stepsFor, T } from './common';
import { convergencePlate, profilePlate } from './plates';
import { proveCase } from './record';
import { chebyshev, setRow } from './spectral';

// Case k. Steady response to an equatorial wind patch with r = κ = 0.1/T: idea of Gill (1980), Q. J. R. Meteorol. Soc.
// 106, 447–462; here with every term, wavenumber by wavenumber (derived for this project). Units L, T:
// −e v″ + (e y² + e (e² + k²) − ik) v = −e y F + ik F′, v = 0 at ±8;
// u = (e (F + yv) + ik v′)/(e² + k²), p = (−e v′ − ik (F + yv))/(e² + k²).
const E = 0.1;
const HALF = 8;
const LX = 40;
const CENTRE = 20;
const TAU = 0.05;
const patch = (x: number, y: number) => Math.exp(-((x - CENTRE) ** 2) / (2 * 3 * 3) - (y * y) / (2 * 1.5 * 1.5));

interface Response {
  /** Nodes of y and, for each wavenumber n = 0 … , real and imaginary part of the amplitude of e^{ik(x − x0)} there. */
  eta: (y: number) => { re: number[]; im: number[] };
  u: (y: number) => { re: number[]; im: number[] };
}

const WAVENUMBERS = 24;

/** The exact response in m and m/s, as Fourier amplitudes of x. */
function response(): Response {
  const { count, nodes, D, interpolate } = chebyshev(80, -HALF, HALF);
  const second = D.mmul(D);
  const profile = nodes.map((y) => Math.exp((-y * y) / (2 * 1.5 * 1.5)));
  const slope = nodes.map((y, i) => (-y / (1.5 * 1.5)) * profile[i]);
  const scaleF = (TAU / (rho0 * H)) * T; // of velocity, m/s
  const parts: Record<'pRe' | 'pIm' | 'uRe' | 'uIm', ((y: number) => number)[]> = {
    pRe: [],
    pIm: [],
    uRe: [],
    uIm: [],
  };
  for (let n = 0; n < WAVENUMBERS; n++) {
    const k = (2 * Math.PI * n) / LX;
    // Fourier amplitude of the Gaussian of x about its centre; its copies a period away are e^{−22} of it.
    const a = ((n === 0 ? 1 : 2) * Math.sqrt(2 * Math.PI) * 3 * Math.exp((-9 * k * k) / 2)) / LX;
    // Real and imaginary parts are solved together.
    const operator = Matrix.zeros(2 * count, 2 * count);
    const right = Matrix.zeros(2 * count, 1);
    for (let i = 0; i < count; i++) {
      const y = nodes[i];
      for (let m = 0; m < count; m++) {
        operator.set(i, m, -E * second.get(i, m));
        operator.set(count + i, count + m, -E * second.get(i, m));
      }
      const diagonal = E * y * y + E * (E * E + k * k);
      operator.set(i, i, operator.get(i, i) + diagonal);
      operator.set(count + i, count + i, operator.get(count + i, count + i) + diagonal);
      // −ik (vr + i vi) = k vi − i k vr.
      operator.set(i, count + i, k);
      operator.set(count + i, i, -k);
      right.set(i, 0, -E * y * profile[i] * a);
      right.set(count + i, 0, k * slope[i] * a);
    }
    for (const wall of [0, count - 1, count, 2 * count - 1])
      setRow(operator, right, wall, (column) => (column === wall ? 1 : 0));
    const v = solve(operator, right);
    const [vr, vi] = [v.subMatrix(0, count - 1, 0, 0), v.subMatrix(count, 2 * count - 1, 0, 0)];
    const [dr, di] = [D.mmul(vr).to1DArray(), D.mmul(vi).to1DArray()];
    const over = scaleF / (E * E + k * k);
    const push = (name: keyof typeof parts, at: (i: number) => number) =>
      parts[name].push(interpolate(nodes.map((_y, i) => over * at(i))));
    const real = (i: number) => a * profile[i] + nodes[i] * vr.get(i, 0);
    const imaginary = (i: number) => nodes[i] * vi.get(i, 0);
    push('uRe', (i) => E * real(i) - k * di[i]);
    push('uIm', (i) => E * imaginary(i) + k * dr[i]);
    push('pRe', (i) => (c / g) * (-E * dr[i] + k * imaginary(i)));
    push('pIm', (i) => (c / g) * (-E * di[i] - k * real(i)));
  }
  const at = (re: ((y: number) => number)[], im: ((y: number) => number)[]) => (y: number) => ({
    re: re.map((f) => f(y)),
    im: im.map((f) => f(y)),
  });
  return { eta: at(parts.pRe, parts.pIm), u: at(parts.uRe, parts.uIm) };
}

function sumAt({ re, im }: { re: number[]; im: number[] }, x: number): number {
  let sum = 0;
  for (let n = 0; n < re.length; n++) {
    const angle = ((2 * Math.PI * n) / LX) * (x - CENTRE);
    sum += re[n] * Math.cos(angle) - im[n] * Math.sin(angle);
  }
  return sum;
}

/** Half-width in L of the equatorial band whose eastward transport across the middle of the patch is taken. */
const BAND = 2;

/** Eastward transport of the band, Sv: midpoints, far finer than any grid here. */
function bandTransport(u: Response['u']): number {
  const rows = 4096;
  let sum = 0;
  for (let j = 0; j < rows; j++) sum += sumAt(u(-BAND + ((j + 0.5) * 2 * BAND) / rows), CENTRE);
  return (sum * 2 * BAND * L * H) / rows / 1e6;
}

interface Found {
  l2: number;
  /** Eastward transport of the band, Sv. */
  transport: number;
  /** Largest η through a parabola along the row pair at the equator, m. */
  largest: number;
  along: { x: number[]; found: number[]; exact: number[] };
}

const exact = response();

function run(perL: number): Found {
  const dx = L / perL;
  const grid = planeGrid({
    nx: LX * perL,
    ny: 2 * HALF * perL,
    dx,
    dy: dx,
    y0: -HALF * L,
    periodic: true,
    f: (y) => beta * y,
    beta,
  });
  // e^{−0.1 · 150} = 3e-7 of what rings at first is left.
  const { steps, dt } = stepsFor(150 * T, commonStep(grid));
  const forcing = forcingFromFunctions(grid, [{ taux: (x, y) => TAU * patch(x / L, y / L) }]);
  const model = commonModel({ grid, dt, rayleigh: E / T, damping: E / T, forcing });
  setState(model, {});
  advance(model, steps);
  const found: number[] = [];
  const expected: number[] = [];
  for (let j = 0; j < grid.ny; j++) {
    const amplitudes = exact.eta(grid.yCentre[j] / L);
    for (let i = 0; i < grid.nx; i++) {
      found.push(valueAt(model, 'h', i, j));
      expected.push(sumAt(amplitudes, grid.xCentre[i] / L));
    }
  }
  const north = grid.ny / 2;
  // η on the equator: even about it, so that 9/8 and −1/8 of the two nearest rows leave an error of fourth order.
  const equator = Array.from(
    { length: grid.nx },
    (_, i) => (9 * valueAt(model, 'h', i, north) - valueAt(model, 'h', i, north + 1)) / 8,
  );
  const peak = equator.indexOf(Math.max(...equator));
  const [w, m, e] = [equator[peak - 1], equator[peak], equator[peak + 1]];
  const amplitudes = exact.eta(0);
  return {
    l2: relativeL2(found, expected),
    transport:
      (Array.from({ length: 2 * BAND * perL }, (_, j) =>
        valueAt(model, 'u', CENTRE * perL, north - BAND * perL + j),
      ).reduce((sum, u) => sum + u, 0) *
        dx *
        H) /
      1e6,
    largest: m - (e - w) ** 2 / (8 * (w - 2 * m + e)),
    along: {
      x: Array.from(grid.xCentre, (x) => x / L - CENTRE),
      found: equator,
      exact: Array.from(grid.xCentre, (x) => sumAt(amplitudes, x / L)),
    },
  };
}

describe('damped response to a wind patch (after Gill 1980)', () => {
  const [coarse, middle, fine] = [2, 4, 8].map(run);

  it('the boundary-value problems have the independently computed figures', () => {
    let [least, largest, largestU] = [0, 0, 0];
    for (let y = 0; y <= 2; y += 0.1) {
      const [eta, u] = [exact.eta(y), exact.u(y)];
      for (let x = 10; x <= 30; x += 0.1) {
        const value = sumAt(eta, x);
        least = Math.min(least, value);
        largest = Math.max(largest, value);
        largestU = Math.max(largestU, sumAt(u, x));
      }
    }
    expect(Math.abs(largest - 6.47376)).toBeLessThan(5e-4);
    expect(Math.abs(least - -5.40626)).toBeLessThan(5e-4);
    expect(Math.abs(largestU - 0.17633)).toBeLessThan(5e-5);
  });
  it('is the boundary-value problems’: L2 error of η below 1.5 % at L/4, second order', (context) => {
    proveCase(context, 'k', {
      id: 'field',
      quantity: 'η, L2 error',
      expected: 0,
      obtained: middle.l2,
      kind: 'L2',
      tolerance: 0.015,
      order: order(middle.l2, fine.l2),
      orderRange: [1.9, 2.1],
      resolution: 'dx = L/4; order from L/4 and L/8',
      plate: convergencePlate(
        'L2 error of the damped response to a wind patch against the spacing.',
        'spacing, L',
        [1 / 2, 1 / 4, 1 / 8],
        [{ name: 'η, L2', values: [coarse.l2, middle.l2, fine.l2] }],
      ),
    });
    expect(order(coarse.l2, middle.l2)).toBeGreaterThan(1.8);
  });
  it('is deepest east of the patch on the equator', (context) => {
    let largest = 0;
    const amplitudes = exact.eta(0);
    for (let x = 22; x <= 28; x += 0.001) largest = Math.max(largest, sumAt(amplitudes, x));
    proveCase(context, 'k', {
      id: 'largest',
      quantity: 'largest η, m',
      expected: largest,
      obtained: fine.largest,
      tolerance: 5e-3,
      resolution: 'dx = L/8',
      plate: profilePlate(
        'η along the equator, found at L/4 and by the boundary-value problems.',
        ['east of the patch, L', 'η, m'],
        [
          { name: 'exact', role: 'expected', x: middle.along.x, y: middle.along.exact },
          { name: 'found', role: 'found', x: middle.along.x, y: middle.along.found },
        ],
      ),
    });
  });

  // Case o. Richardson extrapolation and grid convergence index: Roache (1994), J. Fluids Eng. 116, 405–413, with the
  // product’s own functions.
  it('the grid convergence index finds order 2 and holds the exact value', (context) => {
    const found = richardson(coarse.transport, middle.transport, fine.transport, 2);
    const transport = bandTransport(exact.u);
    expect(found.verdict).toBe('asymptotic');
    proveCase(context, 'o', {
      id: 'order',
      quantity: 'observed order of the equatorial transport on three grids',
      expected: 2,
      obtained: found.order ?? NaN,
      kind: 'absolute',
      tolerance: 0.2,
      resolution: 'dx = L/2, L/4, L/8',
    });
    proveCase(context, 'o', {
      id: 'extrapolated',
      quantity: 'extrapolated eastward transport within 2 L of the equator, Sv',
      expected: transport,
      obtained: found.extrapolated ?? NaN,
      tolerance: 1e-3,
      resolution: 'dx = L/2, L/4, L/8',
    });
    proveCase(context, 'o', {
      id: 'index',
      quantity: 'true error of the fine grid over its grid convergence index, at most',
      expected: 1,
      obtained: Math.abs(fine.transport - transport) / (found.gci?.fine.amount ?? NaN),
      kind: 'atMost',
      resolution: 'dx = L/2, L/4, L/8',
    });
    proveCase(context, 'o', {
      id: 'asymptotic-ratio',
      quantity: 'index of the medium grid over r^p times that of the fine one',
      expected: 1,
      obtained: found.asymptoticRatio ?? NaN,
      tolerance: 0.05,
      resolution: 'dx = L/2, L/4, L/8',
    });
  });
});
