import { CALM, type Forcing } from '../forcing/forcing';
import type { Grid } from '../grid/grid';
import { reserveWorkspace, type Workspace } from '../kernel/workspace';
import { rowFactors, type RowFactors } from './coefficients';
import { copyHistory, fieldOf, fillSeam, type StateVariable } from './fields';
import { Arena, layoutOf, WEST, type Layout } from './layout';
import { refuseBadOptions, type EntrainmentOptions, type ModelOptions, type ViscosityMap } from './model-options';
import { coastCorners, spansOf, type CoastCorners, type ModelSpans, type Spans } from './spans';
import { fillStatics, reserveStatics, type Statics } from './statics';
import { LINEAR_TERMS, NONLINEAR_TERMS, reserveSums, sumsAt, type StepSums, type SumsPlace } from './sums';

/**
 * The equations of numerics.md §1 on one grid: state, coefficients and scratch rows, in one memory that every stepper
 * shares. Fields are reached through `viewOf`, `fieldOf` and `valueAt`; land and halos beyond walls stay exactly 0.
 */
export interface Model {
  readonly grid: Grid;
  readonly equations: 'linear' | 'nonlinear';
  readonly dt: number;
  readonly reducedGravity: number;
  readonly restThickness: number;
  readonly density: number;
  readonly rayleigh: number;
  /** A where no map takes its place. */
  readonly viscosity: number;
  /** The largest A anywhere: what bounds the time step. */
  readonly largestViscosity: number;
  readonly damping: number;
  readonly slip: 'free' | 'none';
  readonly forcing: Forcing;
  readonly minimumThickness: number;
  readonly entrainment: EntrainmentOptions | null;
  readonly stressFloor: number;
  /** Completed steps, absolute. */
  step: number;
  /** Which level block is which level of time: `levelOffset`. Grows by one a step, modulo 4. */
  phase: number;
  readonly layout: Layout;
  /** Levels, ring, static planes, one row of stress, sums. */
  readonly data: Float64Array;
  readonly statics: Statics;
  readonly rows: RowFactors;
  readonly spans: ModelSpans;
  readonly coastCorners: CoastCorners;
  /** Factors of the forcing bases at n + ½. */
  readonly factors: Float64Array;
  /** Offset of one padded row of τ/(ρ0 H) (linear) or τ/ρ0 (nonlinear). */
  readonly stress: number;
  readonly sumsPlace: SumsPlace;
  /** Views of the step's sums; written when the reference stepper is asked for them. */
  readonly sums: StepSums;
  /** The memory that `data` lies in, and the compiled stepper's own part of it; null where the model has its own. */
  readonly memory: WebAssembly.Memory | null;
  readonly workspace: Workspace | null;
}

/** A model at rest at step 0. Throws RangeError naming a coefficient that is not finite or has the wrong sign. */
export function createModel(options: ModelOptions): Model {
  refuseBadOptions(options);
  const { grid, dt, reducedGravity, restThickness, equations = 'linear' } = options;
  const { density = 1025, rayleigh = 0, viscosity = 0, damping = 0, slip = 'free', forcing = CALM } = options;
  const { minimumThickness = 0, stressFloor = 0, meridians = [] } = options;
  const entrainment = equations === 'nonlinear' ? (options.entrainment ?? null) : null;
  const layout = layoutOf(grid, equations);
  const arena = new Arena(layout.length);
  const { statics, fills } = reserveStatics(arena, layout, options, forcing);
  const stress = arena.reserve(layout.pitch);
  const sumsPlace = reserveSums(arena, grid.ny, equations === 'linear' ? LINEAR_TERMS : NONLINEAR_TERMS, meridians);
  const spans = spansOf(grid);
  const corners = coastCorners(grid);
  const ownLength = arena.length;
  const parts = { grid, layout, spans, coastCorners: corners, forcing, sums: sumsPlace, threads: options.threads ?? 1 };
  const workspace = options.allocate ? reserveWorkspace(arena, parts) : null;
  const given = options.allocate?.(8 * arena.length) ?? null;
  const length = given ? arena.length : ownLength;
  const { buffer, byteOffset } = given ?? { buffer: new ArrayBuffer(8 * length), byteOffset: 0 };
  const data = new Float64Array(buffer, byteOffset, length);
  fillStatics(data, layout, grid.periodic, fills);
  return {
    grid,
    equations,
    dt,
    reducedGravity,
    restThickness,
    density,
    rayleigh,
    viscosity,
    largestViscosity: largestOf(options.viscosityMap) ?? viscosity,
    damping,
    slip,
    forcing,
    minimumThickness,
    entrainment,
    stressFloor,
    step: 0,
    phase: 0,
    layout,
    data,
    statics,
    rows: rowFactors(grid),
    spans,
    coastCorners: corners,
    factors: new Float64Array(forcing.bases.length),
    stress,
    sumsPlace,
    sums: sumsAt(data, sumsPlace, grid.ny),
    memory: given?.memory ?? null,
    workspace: given ? workspace : null,
  };
}

function largestOf(map: ViscosityMap | null | undefined): number | null {
  if (!map) return null;
  const most = (values: Float64Array) => values.reduce((largest, A) => Math.max(largest, A), 0);
  return Math.max(most(map.cell), most(map.corner));
}

/** Values of an initial state: numbers at (column, row) of the field's own points; left out means 0. */
export interface InitialValues {
  /** h − H, m. */
  eta?: (i: number, j: number) => number;
  u?: (i: number, j: number) => number;
  v?: (i: number, j: number) => number;
}

/**
 * Sets the present state on water points and copies it to the two levels before (one local error of order dt²).
 * Throws RangeError when a value is not finite, or a nonlinear layer would be no thicker than 0.
 */
export function setState(model: Model, values: InitialValues): void {
  setLevel(model, values);
  copyHistory(model);
}

/** Sets the present level of a state on water points and leaves the two before as they are; errors as `setState`. */
export function setLevel(model: Model, values: InitialValues): void {
  const base = model.equations === 'nonlinear' ? model.restThickness : 0;
  const fill = (name: 'eta' | 'u' | 'v', variable: StateVariable, spans: Spans, rest: number) => {
    const { data, offset, rowStride } = fieldOf(model, variable);
    const at = values[name];
    for (let j = 0; j + 1 < spans.rowStart.length; j++)
      forRuns(spans, j, (first, end) => {
        for (let i = first; i < end; i++) {
          const value = at?.(i, j) ?? 0;
          if (!Number.isFinite(value))
            throw new RangeError(`The start state has ${name} = ${value} at a water point; it must be finite.`);
          if (rest > 0 && !(rest + value > 0))
            throw new RangeError(
              `The start state has a layer of ${rest + value} m at column ${i}, row ${j}; it must be thicker than 0.`,
            );
          data[offset + j * rowStride + i] = rest > 0 ? rest + value : value; // 0 + (−0) would not be −0
        }
      });
    fillSeam(model, variable);
  };
  fill('eta', 'h', model.spans.cells, base);
  fill('u', 'u', model.spans.uPoints, 0);
  fill('v', 'v', model.spans.vPoints, 0);
}

/** Calls `run` with the first and the end column (cells counted from 0) of each run of row j. */
export function forRuns(spans: Spans, j: number, run: (first: number, end: number) => void): void {
  for (let s = spans.rowStart[j]; s < spans.rowStart[j + 1]; s++)
    run(spans.bounds[2 * s] - WEST, spans.bounds[2 * s + 1] - WEST);
}
