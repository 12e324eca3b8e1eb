import { forcingFromFunctions } from '../forcing/forcing';
import { planeGrid } from '../grid/grid';
import { createModel, setState, type Model } from '../stepper/model';
import type { ModelOptions } from '../stepper/model-options';

/** What a random model has; left out means not. */
export interface RandomModelOptions {
  seed: number;
  periodic?: boolean;
  slip?: 'free' | 'none';
  /** Rows of unequal length, as on a latitude band. */
  band?: boolean;
  viscosityMap?: boolean;
  sponge?: boolean;
  more?: Partial<ModelOptions>;
}

/** Numbers in [0, 1) from a seed (a linear congruential generator, Knuth's MMIX constants in 32 bits). */
export function randomNumbers(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    return state / 2 ** 32;
  };
}

/**
 * A small model about the equator with random land, random state and a wind that varies in space and time; drag, damping
 * and viscosity on. For specs of identities that hold for any state.
 */
export function randomModel(options: RandomModelOptions): Model {
  const { seed, periodic = false, slip = 'free', band = false, viscosityMap = false, sponge = false, more } = options;
  const random = randomNumbers(seed);
  const [nx, ny, dx, dy] = [21, 16, 5e4, 4e4];
  const grid = planeGrid({
    nx,
    ny,
    dx,
    dy,
    y0: -8 * dy,
    periodic,
    f: (y) => 2.3e-11 * y,
    beta: 2.3e-11,
    isWater: () => random() > 0.2,
  });
  if (band) {
    grid.dxC.forEach((_, j) => (grid.dxC[j] = dx * Math.cos((j + 0.5 - ny / 2) / ny)));
    grid.dxV.forEach((_, j) => (grid.dxV[j] = dx * Math.cos((j - ny / 2) / ny)));
  }
  const forcing = forcingFromFunctions(grid, [
    { taux: (x, y) => 0.05 + y * 1e-8 + x * 1e-9, tauy: (x) => x * 1e-8, factor: (step) => 1 + 0.1 * (step % 7) },
  ]);
  const field = (rows: number, columns: number, scale: number) =>
    Float64Array.from({ length: rows * columns }, () => scale * random());
  const seam = (values: Float64Array, rows: number, columns: number) => {
    // The corner at nx is that at 0.
    if (periodic) for (let j = 0; j < rows; j++) values[j * columns + columns - 1] = values[j * columns];
    return values;
  };
  const model = createModel({
    grid,
    dt: 3000,
    reducedGravity: 0.03,
    restThickness: 200,
    rayleigh: 1e-6,
    viscosity: 3000,
    damping: 1e-7,
    slip,
    forcing,
    viscosityMap: viscosityMap
      ? { cell: field(ny, nx, 4000), corner: seam(field(ny + 1, nx + 1, 4000), ny + 1, nx + 1) }
      : null,
    sponge: sponge
      ? {
          u: seam(field(ny, nx + 1, 1e-5), ny, nx + 1),
          v: field(ny + 1, nx, 1e-5),
          cell: field(ny, nx, 1e-5),
        }
      : null,
    ...more,
  });
  setState(model, {
    eta: () => 20 * (random() - 0.5),
    u: () => 0.4 * (random() - 0.5),
    v: () => 0.4 * (random() - 0.5),
  });
  return model;
}
