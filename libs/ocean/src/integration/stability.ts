import type { Grid } from '../grid/grid';

/** The numbers that bound the time step (numerics.md §5), with the smallest dx of the grid. */
export interface StabilityNumbers {
  /** c dt √(1/dx² + 1/dy²); the scheme allows 0.89. */
  gravity: number;
  /** |f|max dt; the scheme allows 0.786. */
  coriolis: number;
  /** A dt (1/dx² + 1/dy²); the scheme allows 0.16. */
  viscous: number;
  /** (S/0.89)² + νS/0.16; must not exceed 1. */
  combined: number;
}

/** Stability numbers of a step dt, s, on a grid; c in m/s, viscosity in m²/s. */
export function stabilityNumbers(grid: Grid, c: number, dt: number, viscosity: number): StabilityNumbers {
  const dx = smallestSpacing(grid);
  const perArea = 1 / (dx * dx) + 1 / (grid.dy * grid.dy);
  const gravity = c * dt * Math.sqrt(perArea);
  const [low, high] = minMax(grid.f);
  const coriolis = Math.max(Math.abs(low), Math.abs(high)) * dt;
  const viscous = viscosity * dt * perArea;
  return { gravity, coriolis, viscous, combined: (gravity / 0.89) ** 2 + viscous / 0.16 };
}

/** Smallest zonal spacing of a grid, m. */
export function smallestSpacing(grid: Grid): number {
  return Math.min(minMax(grid.dxC)[0], minMax(grid.dxV)[0]);
}

function minMax(values: Float64Array): [number, number] {
  let low = Infinity;
  let high = -Infinity;
  for (const value of values) {
    low = Math.min(low, value);
    high = Math.max(high, value);
  }
  return [low, high];
}
