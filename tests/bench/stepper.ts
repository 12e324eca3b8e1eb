import {
  buildGrid,
  createModel,
  Integration,
  SECONDS_PER_DAY,
  stepModel,
  windForcing,
  type Model,
  type Setup,
} from '@halfdeep/ocean';
import { corvaneForCheck } from '../../libs/ocean/src/testing/setups';
import { timed } from './cpu';

/** Millions of cell-steps a second of CPU, dry cells counted: the best of interleaved chunks. */
export interface StepperRow {
  grid: string;
  cells: number;
  /** The step alone. */
  plain: number;
  /** With the work of every term and the sections added up every step, and the state checked: what a run does. */
  recording: number;
  /** plain / recording. */
  factor: number;
}

const GRIDS = [
  [128, 96],
  [240, 140],
  [300, 200],
  [1000, 600],
] as const;
const ROUNDS = 5;
/** Cell-steps of one chunk. */
const CHUNK = 1.2e7;

/** The Corvane setup on nx × ny cells, with a step that is stable there and a length beyond what the bench steps. */
export function corvaneOn(nx: number, ny: number): Setup {
  const setup = corvaneForCheck();
  const extent = { zonal: 60, meridional: 35 };
  const coarsest = Math.max(extent.zonal / nx, extent.meridional / ny) / 0.25;
  const finest = Math.min(extent.zonal / nx, extent.meridional / ny) / 0.25;
  return {
    ...setup,
    friction: { ...setup.friction, viscosityM2S: 4000 * finest },
    numerics: {
      equations: 'linear',
      spacingLongitudeDeg: extent.zonal / nx,
      spacingLatitudeDeg: extent.meridional / ny,
      stepsPerDay: 4 * Math.ceil((4 * Math.max(1, coarsest)) / Math.min(1, finest)),
    },
  };
}

export async function benchStepper(): Promise<StepperRow[]> {
  const rows: StepperRow[] = [];
  for (const [nx, ny] of GRIDS) {
    const setup = corvaneOn(nx, ny);
    const model = plainModel(setup);
    const run = Integration.start(setup);
    const cells = nx * ny;
    const steps = Math.max(20, 20 * Math.round(CHUNK / cells / 20));
    const best = { plain: 0, recording: 0 };
    for (let round = 0; round < ROUNDS; round++) {
      const plain = await timed(() => {
        for (let n = 0; n < steps; n++) stepModel(model);
      });
      const recording = await timed(() => run.advance(steps));
      best.plain = Math.max(best.plain, (cells * steps) / plain / 1e6);
      best.recording = Math.max(best.recording, (cells * steps) / recording / 1e6);
    }
    rows.push({ grid: `${nx} × ${ny}`, cells, ...best, factor: best.plain / best.recording });
  }
  return rows;
}

function plainModel(setup: Setup): Model {
  const grid = buildGrid(setup);
  return createModel({
    grid,
    dt: SECONDS_PER_DAY / setup.numerics.stepsPerDay,
    reducedGravity: setup.layer.reducedGravityMS2,
    restThickness: setup.layer.restThicknessM,
    density: setup.constants.densityKgM3,
    rayleigh: setup.friction.rayleighPerS,
    viscosity: setup.friction.viscosityM2S,
    damping: setup.layer.dampingPerS,
    slip: setup.friction.slip,
    forcing: windForcing(setup, grid),
  });
}

/** Size of a checkpoint and CPU seconds to make and to restore one. */
export interface CheckpointRow {
  grid: string;
  megabytes: number;
  makeSeconds: number;
  restoreSeconds: number;
}

export async function benchCheckpoints(): Promise<CheckpointRow[]> {
  const rows: CheckpointRow[] = [];
  for (const [nx, ny] of GRIDS) {
    const setup = corvaneOn(nx, ny);
    const run = Integration.start(setup);
    run.advance(20);
    const row = { grid: `${nx} × ${ny}`, megabytes: 0, makeSeconds: Infinity, restoreSeconds: Infinity };
    for (let round = 0; round < 3; round++) {
      let bytes = new Uint8Array();
      row.makeSeconds = Math.min(
        row.makeSeconds,
        await timed(() => {
          bytes = run.checkpoint() as Uint8Array<ArrayBuffer>;
        }),
      );
      row.megabytes = bytes.length / 1e6;
      row.restoreSeconds = Math.min(
        row.restoreSeconds,
        await timed(() => {
          Integration.restore(setup, bytes);
        }),
      );
    }
    rows.push(row);
  }
  return rows;
}
