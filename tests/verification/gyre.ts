import { forcingFromFunctions, planeGrid, setState, valueAt, type Grid, type Model } from '@halfdeep/ocean';
import { advance, commonModel, commonStep, DAY, H, rho0, stepsFor } from './common';

/** Basin of cases e and g: 2000 × 2000 km, f = 1e-5 + 2e-11 y, τx = −0.05 cos(πy/Ly). */
export const SIDE = 2e6;
export const BETA = 2e-11;
export const TAU0 = 0.05;

/** Runs the gyre from rest for so many years of 365 days and returns the model; `each` sees it after every step. */
export function runGyre(
  dx: number,
  rayleigh: number,
  years: number,
  each?: (model: Model, step: number, steps: number) => void,
): { grid: Grid; model: Model } {
  const n = SIDE / dx;
  const grid = planeGrid({ nx: n, ny: n, dx, dy: dx, f: (y) => 1e-5 + BETA * y, beta: BETA });
  const forcing = forcingFromFunctions(grid, [{ taux: (_x, y) => -TAU0 * Math.cos((Math.PI * y) / SIDE) }]);
  const { steps, dt } = stepsFor(years * 365 * DAY, commonStep(grid));
  const model = commonModel({ grid, dt, rayleigh, forcing });
  setState(model, {});
  if (!each) advance(model, steps);
  else
    for (let step = 1; step <= steps; step++) {
      advance(model);
      each(model, step, steps);
    }
  return { grid, model };
}

/** Largest transport streamfunction, m³/s: V summed from the western wall, at corners. */
export function largestTransport(model: Model): number {
  const { grid } = model;
  let largest = 0;
  for (let j = 0; j <= grid.ny; j++) {
    let psi = 0;
    for (let i = 0; i < grid.nx; i++) {
      psi += valueAt(model, 'v', i, j) * H * grid.dxV[j];
      largest = Math.max(largest, psi);
    }
  }
  return largest;
}

/** Stommel's (1948) closed form: ψ and v = ψx at (x, y), with a and b from ψ = 0 on both walls. */
export function stommel(r: number): {
  psi: (x: number, y: number) => number;
  v: (x: number, y: number) => number;
} {
  const l = Math.PI / SIDE;
  const F = (TAU0 * l) / (rho0 * H);
  const root = Math.sqrt((BETA / r) ** 2 + 4 * l * l);
  const m1 = (-BETA / r + root) / 2;
  const m2 = (-BETA / r - root) / 2;
  const a = (Math.exp(m2 * SIDE) - 1) / (Math.exp(m1 * SIDE) - Math.exp(m2 * SIDE));
  const b = -1 - a;
  const scale = (y: number) => (Math.sin(l * y) * F) / (r * l * l);
  return {
    psi: (x, y) => scale(y) * (1 + a * Math.exp(m1 * x) + b * Math.exp(m2 * x)),
    v: (x, y) => scale(y) * (a * m1 * Math.exp(m1 * x) + b * m2 * Math.exp(m2 * x)),
  };
}
