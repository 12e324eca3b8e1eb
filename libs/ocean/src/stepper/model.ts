import ndarray, { type NdArray } from 'ndarray';
import { CALM, type Forcing } from '../forcing/forcing';
import { paddedLength, type Grid } from '../grid/grid';
import { rowFactors, type RowFactors } from './coefficients';
import { refuseBadOptions, type ModelOptions } from './model-options';
import { cellSpans, coastCorners, uSpans, vSpans, type CoastCorners, type Spans } from './spans';

/** Three time levels of a field and the buffer of the next; padded. */
export interface Levels {
  now: Float64Array;
  previous: Float64Array;
  before: Float64Array;
  next: Float64Array;
}

export type Field = NdArray<Float64Array>;

/**
 * The linear equations of numerics.md §1 on one grid: state, coefficients and scratch rows. `advanceModel` steps it.
 * Arrays are padded (see Grid); land and halos beyond walls stay exactly 0.
 */
export interface Model {
  readonly grid: Grid;
  readonly dt: number;
  readonly reducedGravity: number;
  readonly restThickness: number;
  readonly density: number;
  readonly rayleigh: number;
  readonly viscosity: number;
  readonly damping: number;
  readonly slip: 'free' | 'none';
  readonly forcing: Forcing;
  /** Completed steps, absolute. */
  step: number;
  readonly eta: Levels;
  readonly u: Levels;
  readonly v: Levels;
  // Rings of four padded rows, filled and used up within a step:
  /** Velocities at n + ½. */
  readonly ut: Float64Array;
  readonly vt: Float64Array;
  /** D = div(ut, vt) and g′p − A D at cells; A s ζ at corners. */
  readonly divergence: Float64Array;
  readonly head: Float64Array;
  readonly spin: Float64Array;
  readonly coastCorners: CoastCorners;
  readonly rows: RowFactors;
  readonly cells: Spans;
  readonly uPoints: Spans;
  readonly vPoints: Spans;
  /** Factors of the forcing bases and one row of τ/(ρ0 H). */
  readonly factors: Float64Array;
  readonly stressRow: Float64Array;
}

/** A model at rest at step 0. Throws RangeError naming a coefficient that is not finite or has the wrong sign. */
export function createModel(options: ModelOptions): Model {
  refuseBadOptions(options);
  const { grid, dt, reducedGravity, restThickness } = options;
  const { density = 1025, rayleigh = 0, viscosity = 0, damping = 0, slip = 'free', forcing = CALM } = options;
  const field = () => new Float64Array(paddedLength(grid));
  const levels = (): Levels => ({ now: field(), previous: field(), before: field(), next: field() });
  const ring = () => new Float64Array(4 * grid.stride);
  return {
    grid,
    dt,
    reducedGravity,
    restThickness,
    density,
    rayleigh,
    viscosity,
    damping,
    slip,
    forcing,
    step: 0,
    eta: levels(),
    u: levels(),
    v: levels(),
    ut: ring(),
    vt: ring(),
    divergence: ring(),
    head: ring(),
    spin: ring(),
    coastCorners: coastCorners(grid),
    rows: rowFactors(grid),
    cells: cellSpans(grid),
    uPoints: uSpans(grid),
    vPoints: vSpans(grid),
    factors: new Float64Array(forcing.bases.length),
    stressRow: new Float64Array(grid.stride),
  };
}

/** Values of an initial state: numbers at (column, row) of the field's own points; left out means 0. */
export interface InitialValues {
  eta?: (i: number, j: number) => number;
  u?: (i: number, j: number) => number;
  v?: (i: number, j: number) => number;
}

/**
 * Sets the present state on water points and copies it to the two levels before (one local error of order dt²).
 * Throws RangeError when a value is not finite.
 */
export function setState(model: Model, values: InitialValues): void {
  const fill = (name: 'eta' | 'u' | 'v', levels: Levels, spans: Spans) => {
    const { stride } = model.grid;
    levels.now.fill(0);
    const at = values[name];
    if (at)
      for (let k = 0; k < spans.bounds.length; k += 2)
        for (let p = spans.bounds[k]; p < spans.bounds[k + 1]; p++) {
          const value = at((p % stride) - 1, Math.floor(p / stride) - 1);
          if (!Number.isFinite(value))
            throw new RangeError(`The start state has ${name} = ${value} at a water point; it must be finite.`);
          levels.now[p] = value;
        }
    fillSeam(model.grid, levels.now);
    copyHistory(levels);
  };
  fill('eta', model.eta, model.cells);
  fill('u', model.u, model.uPoints);
  fill('v', model.v, model.vPoints);
}

/** Rebuilds the two older levels as copies of the present one. */
export function copyHistory(levels: Levels): void {
  levels.previous.set(levels.now);
  levels.before.set(levels.now);
}

/** Periodic copies of the first and last columns into the halo; nothing on a closed grid. */
export function fillSeam(grid: Grid, data: Float64Array): void {
  if (!grid.periodic) return;
  const { nx, stride } = grid;
  for (let base = 0; base < data.length; base += stride) {
    data[base] = data[base + nx];
    data[base + nx + 1] = data[base + 1];
  }
}

/** Logical views without halos: η and cells [ny][nx], u [ny][nx + 1], v [ny + 1][nx]; they share the data. */
export function viewOf(grid: Grid, variable: 'eta' | 'u' | 'v', data: Float64Array): Field {
  const { nx, ny, stride } = grid;
  const shape = variable === 'eta' ? [ny, nx] : variable === 'u' ? [ny, nx + 1] : [ny + 1, nx];
  return ndarray(data, shape, [stride, 1], stride + 1);
}
