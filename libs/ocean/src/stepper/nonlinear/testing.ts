import { forcingFromFunctions } from '../../forcing/forcing';
import { planeGrid, type Grid } from '../../grid/grid';
import { createModel, setLevel, type Model } from '../model';
import type { ModelOptions } from '../model-options';

/** Pseudo-random numbers in (−1, 1), the same every time: Park & Miller (1988) minimal standard. */
export function noise(seed: number): () => number {
  let state = seed;
  return () => {
    state = (state * 48_271) % 2_147_483_647;
    return (2 * state) / 2_147_483_647 - 1;
  };
}

/** What a random nonlinear model may have. */
export interface RandomOptions extends Partial<ModelOptions> {
  periodic?: boolean;
  /** Rows of unequal length with f = 2Ω sin φ, as on a latitude band. */
  band?: boolean;
  /** Sponges and a viscosity that varies at random. */
  varies?: boolean;
  /** Share of land cells. */
  land?: number;
  /** Mean thickness of the start, m, and largest departure from it. */
  thickness?: number;
  departure?: number;
  speed?: number;
}

/** Grid of 17 × 13 cells with land at random. */
export function randomGrid(seed: number, { periodic = false, band = false, land = 0.25 }: RandomOptions): Grid {
  const random = noise(seed);
  const grid = planeGrid({
    nx: 17,
    ny: 13,
    dx: 8e4,
    dy: 6e4,
    y0: -4e5,
    periodic,
    f: (y) => 2.3e-11 * y,
    beta: 2.3e-11,
    isWater: () => random() > 2 * land - 1,
  });
  if (band) {
    grid.dxC.forEach((_dx, j) => (grid.dxC[j] = 8e4 * Math.cos(0.09 * (j + 0.5 - 6.5))));
    grid.dxV.forEach((_dx, j) => (grid.dxV[j] = 8e4 * Math.cos(0.09 * (j - 6.5))));
    grid.f.forEach((_f, j) => (grid.f[j] = 1e-4 * Math.sin(0.09 * (j - 6.5))));
  }
  return grid;
}

/** A nonlinear model with a random state of three unequal levels on random land. */
export function randomModel(seed: number, options: RandomOptions = {}): Model {
  const { varies = false, thickness = 100, departure = 40, speed = 0.5, ...rest } = options;
  const grid = rest.grid ?? randomGrid(seed, options);
  const random = noise(seed + 100);
  const positive = (length: number, size: number) => Float64Array.from({ length }, () => size * (1 + random()));
  const { nx, ny } = grid;
  const forcing = forcingFromFunctions(grid, [
    { taux: () => 0.1 * random(), tauy: () => 0.1 * random(), factor: (step) => 1 + 0.1 * (step % 3) },
  ]);
  const model = createModel({
    grid,
    equations: 'nonlinear',
    dt: 2000,
    reducedGravity: 0.03,
    restThickness: 120,
    forcing,
    sponge: varies
      ? { u: positive(ny * (nx + 1), 1e-6), v: positive((ny + 1) * nx, 2e-6), cell: positive(ny * nx, 1e-6) }
      : null,
    viscosityMap: varies ? { cell: positive(ny * nx, 2000), corner: positive((ny + 1) * (nx + 1), 1500) } : null,
    ...rest,
  });
  const H = model.restThickness;
  // Three levels of their own: each is set as the present one, then the roles move on.
  for (let level = 0; level < 3; level++) {
    model.phase = (model.phase + 1) & 3;
    setLevel(model, {
      eta: () => thickness - H + departure * random(),
      u: () => speed * random(),
      v: () => speed * random(),
    });
  }
  return model;
}
