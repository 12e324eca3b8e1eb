import {
  createModel,
  Integration,
  SECONDS_PER_DAY,
  buildGrid,
  windForcing,
  type Model,
  type ModelOptions,
  type Setup,
} from '@halfdeep/ocean';
import { setState } from '../../libs/ocean/src/stepper/model';
import { createStepper, steppedBy, type Stepper, type StepperOptions } from '../../libs/ocean/src/stepper/stepper';
import { corvaneForCheck } from '../../libs/ocean/src/testing/setups';
import { WorkerThreadTeam } from '../../worker/src/team/thread-team';
import { timed } from './cpu';
import { differenceFrom, NativeStepper, numpyCommand, type NativePrograms, type Spent } from './native';

export type Equations = 'linear' | 'nonlinear';
export const GRIDS = [
  [128, 96],
  [300, 200],
  [1000, 600],
  [2000, 1200],
] as const;
/** The grids whose checkpoints are timed. */
const CHECKPOINT_GRIDS = GRIDS.slice(0, 3);

/** What is measured on each grid; `simd` steps by the compiled kernel, `native` and `sse2` are the C reference. */
export const STEPPERS = ['simd', 'reference', 'native', 'sse2', 'numpy', 'numpyPlain'] as const;
export type StepperName = (typeof STEPPERS)[number];

/** One grid of one mode. Millions of cell-steps a second of CPU, dry cells counted: the best of interleaved chunks. */
export interface StepperRow {
  grid: string;
  cells: number;
  /** Of the stepper that runs take by default. */
  mcs: number;
  kernel: 'simd' | 'reference';
  /** Of every stepper; null where it cannot run here. */
  speeds: Record<StepperName, number | null>;
  /** mcs over the speed of each; null where there is none. */
  vsNativeC: number | null;
  vsSse2C: number | null;
  vsNumPy: number | null;
  vsNumPyPlain: number | null;
  vsReference: number | null;
  /** Reference over native C. */
  referenceVsNativeC: number | null;
  /** Two threads over one, by the clock on the wall; null where the kernel has one thread. */
  threads2: number | null;
  /** With the work of every term and the sections added up every step, and the state checked: what a run does. */
  recording: number;
  /** mcs / recording. */
  factor: number;
  /** Bytes of the model's memory a cell. */
  bytesPerCell: number;
  /** Bytes that a step by itself moves between memory and core for a cell: nine values read, three written. */
  movedPerCellStep: number;
  /** mcs times those bytes over STREAM's bandwidth; more than 1 when several steps are made while rows are in cache. */
  streamFraction: number | null;
  /** Whether every stepper left the same bits as the reference. */
  sameBits: boolean;
}

/** The Corvane setup on nx × ny cells, with a step that is stable there and a length beyond what the bench steps. */
export function corvaneOn(nx: number, ny: number, equations: Equations = 'linear'): Setup {
  const setup = corvaneForCheck();
  const extent = { zonal: 60, meridional: 35 };
  const coarsest = Math.max(extent.zonal / nx, extent.meridional / ny) / 0.25;
  const finest = Math.min(extent.zonal / nx, extent.meridional / ny) / 0.25;
  const perDay = equations === 'linear' ? 4 : 5;
  return {
    ...setup,
    layer: {
      ...setup.layer,
      minimumThicknessM: 20,
      entrainment: equations === 'linear' ? null : { onsetThicknessM: 60, timescaleDays: 10, detrainment: 'none' },
    },
    friction: { ...setup.friction, viscosityM2S: 4000 * finest },
    numerics: {
      equations,
      spacingLongitudeDeg: extent.zonal / nx,
      spacingLatitudeDeg: extent.meridional / ny,
      stepsPerDay: 4 * Math.ceil((perDay * Math.max(1, coarsest)) / Math.min(1, finest)),
    },
  };
}

/** Options of a model of a setup without sponges and maps of viscosity, which is what the references know. */
function optionsOf(setup: Setup): ModelOptions {
  const grid = buildGrid(setup);
  const { layer, numerics, wind } = setup;
  const { entrainment } = layer;
  return {
    grid,
    equations: numerics.equations,
    dt: SECONDS_PER_DAY / numerics.stepsPerDay,
    reducedGravity: layer.reducedGravityMS2,
    restThickness: layer.restThicknessM,
    density: setup.constants.densityKgM3,
    rayleigh: setup.friction.rayleighPerS,
    viscosity: setup.friction.viscosityM2S,
    damping: layer.dampingPerS,
    slip: setup.friction.slip,
    forcing: windForcing(setup, grid),
    minimumThickness: numerics.equations === 'nonlinear' ? layer.minimumThicknessM : 0,
    entrainment:
      numerics.equations === 'nonlinear' && entrainment
        ? {
            onsetThickness: entrainment.onsetThicknessM,
            timescale: entrainment.timescaleDays * SECONDS_PER_DAY,
            detrainment: entrainment.detrainment,
          }
        : null,
    stressFloor: wind.stressFloorM,
  };
}

/** A model in motion: a bump and currents, so that no stepper works on zeros (and none on denormal numbers). */
function movingModel(setup: Setup, stepping: StepperOptions = { kernel: 'reference' }): Model {
  const options = optionsOf(setup);
  const model = createModel({ ...options, ...steppedBy(stepping, options.grid.nx) });
  const { nx, ny } = model.grid;
  const wave = (i: number, j: number) => Math.sin((6.28 * i) / nx + 1) * Math.cos((9.42 * j) / ny);
  setState(model, {
    eta: (i, j) => 8 * wave(i, j),
    u: (i, j) => 0.05 * wave(i + nx / 3, j),
    v: (i, j) => 0.03 * wave(i, j + ny / 4),
  });
  return model;
}

/** A stepper on trial: `run` makes steps and says what they took. */
interface Runner {
  name: StepperName | 'simd2';
  run: (steps: number) => Promise<Spent>;
  /** What differs from the reference after the same number of steps, or null. */
  difference: (reference: Model) => Promise<string | null>;
  close: () => Promise<void>;
}

function inProcess(
  name: Runner['name'],
  setup: Setup,
  stepping: StepperOptions,
): { runner: Runner; model: Model; stepper: Stepper } {
  const model = movingModel(setup, stepping);
  const stepper = createStepper(model, stepping);
  const runner: Runner = {
    name,
    run: async (steps) => {
      const wall = performance.now();
      const cpu = await timed(() => stepper.advance(steps));
      return { cpu, wall: (performance.now() - wall) / 1000 };
    },
    difference: (reference) => Promise.resolve(sameLevels(reference, model)),
    close: () => Promise.resolve(stepper.dismiss()),
  };
  return { runner, model, stepper };
}

/** The compiled stepper alone and with a helper thread; nothing where this machine or the equations have none. */
function compiled(setup: Setup): { runners: Runner[]; bytes: number } {
  try {
    const { runner, model } = inProcess('simd', setup, { kernel: 'simd' });
    const runners = [runner];
    const two = inProcess('simd2', setup, { kernel: 'simd', team: new WorkerThreadTeam(2) });
    if (two.stepper.threads === 2) runners.push(two.runner);
    else two.stepper.dismiss();
    return { runners, bytes: model.memory?.buffer.byteLength ?? model.data.byteLength };
  } catch (error) {
    if (!(error instanceof RangeError)) throw error;
    return { runners: [], bytes: NaN };
  }
}

/** Sentence about the first of the levels' numbers that differs, or null. */
function sameLevels(a: Model, b: Model): string | null {
  for (const offset of a.layout.levels)
    for (let k = offset; k < offset + a.layout.levelLength; k++)
      if (!Object.is(a.data[k], b.data[k])) return `number ${k} is ${b.data[k]} against ${a.data[k]}`;
  return null;
}

async function inChild(name: StepperName, command: readonly string[], setup: Setup): Promise<Runner> {
  const stepper = await NativeStepper.start(command, movingModel(setup));
  return {
    name,
    run: (steps) => stepper.run(steps),
    difference: (reference) => differenceFrom(reference, stepper, name.startsWith('numpy') ? 'alike' : 'exact'),
    close: () => stepper.close(),
  };
}

const ROUNDS = 5;
/** Cell-steps of one chunk. */
const CHUNK: Record<StepperName | 'simd2', number> = {
  simd: 2.4e7,
  simd2: 2.4e7,
  reference: 1e7,
  native: 2.4e7,
  sse2: 2.4e7,
  numpy: 3e6,
  numpyPlain: 2e6,
};
/** Whole numbers of this many steps: the compiled kernel makes four steps a sweep out of cache. */
const STEPS_OF = 4;

function stepsOf(name: Runner['name'], cells: number): number {
  return STEPS_OF * Math.max(1, Math.round(CHUNK[name] / cells / STEPS_OF));
}

/** All steppers on one grid, chunk by chunk in turn. `bandwidth`: of STREAM, bytes a second. */
export async function benchGrid(
  equations: Equations,
  [nx, ny]: readonly [number, number],
  programs: NativePrograms | null,
  bandwidth: number | null,
): Promise<StepperRow> {
  const setup = corvaneOn(nx, ny, equations);
  const cells = nx * ny;
  const runners: Runner[] = [];
  try {
    const { runner: referenceRunner, model } = inProcess('reference', setup, { kernel: 'reference' });
    runners.push(referenceRunner);
    const simd = compiled(setup);
    runners.push(...simd.runners);
    if (programs)
      for (const name of ['native', 'sse2'] as const) runners.push(await inChild(name, [programs[name]], setup));
    for (const [name, style] of [
      ['numpy', 'out'],
      ['numpyPlain', 'plain'],
    ] as const) {
      const command = numpyCommand(style);
      if (command) runners.push(await inChild(name, command, setup));
    }
    // First the proof that all of them compute the same, which also warms them up.
    const warm = Math.max(8, 4 * Math.round(1e5 / cells));
    for (const runner of runners) await runner.run(warm);
    for (const runner of runners) {
      const difference = await runner.difference(model);
      if (difference !== null)
        throw new Error(`${equations}, ${nx} × ${ny}: ${runner.name} differs from the reference: ${difference}.`);
    }
    const run = Integration.start(setup);
    const best = new Map<string, number>();
    const keep = (name: string, steps: number, seconds: number) =>
      best.set(name, Math.max(best.get(name) ?? 0, (cells * steps) / seconds / 1e6));
    for (let round = 0; round < ROUNDS; round++) {
      for (const { name, run: advance } of runners) {
        const steps = stepsOf(name, cells);
        const { cpu, wall } = await advance(steps);
        keep(name, steps, cpu);
        keep(`${name} wall`, steps, wall);
      }
      const steps = 20 * Math.max(1, Math.round(CHUNK.reference / cells / 20));
      keep('recording', steps, await timed(() => run.advance(steps)));
    }
    const speeds = Object.fromEntries(STEPPERS.map((name) => [name, best.get(name) ?? null])) as Record<
      StepperName,
      number | null
    >;
    const kernel = speeds.simd === null ? 'reference' : 'simd';
    const mcs = speeds[kernel]!;
    const over = (name: StepperName) => (speeds[name] === null ? null : mcs / speeds[name]);
    const [one, two] = [best.get('simd wall'), best.get('simd2 wall')];
    const recording = best.get('recording')!;
    const moved = movedPerCellStep(model);
    return {
      grid: `${nx}x${ny}`,
      cells,
      mcs,
      kernel,
      speeds,
      vsNativeC: over('native'),
      vsSse2C: over('sse2'),
      vsNumPy: over('numpy'),
      vsNumPyPlain: over('numpyPlain'),
      vsReference: over('reference'),
      referenceVsNativeC: speeds.native === null ? null : speeds.reference! / speeds.native,
      threads2: one !== undefined && two !== undefined ? two / one : null,
      recording,
      factor: mcs / recording,
      bytesPerCell: (kernel === 'simd' ? simd.bytes : model.data.byteLength) / cells,
      movedPerCellStep: moved,
      streamFraction: bandwidth === null ? null : (mcs * 1e6 * moved) / bandwidth,
      sameBits: true,
    };
  } finally {
    for (const runner of runners) await runner.close();
  }
}

/** Three levels of h, u and v read and one written; fields of stress, one a basis and component, read. */
function movedPerCellStep({ statics }: Model): number {
  const fields = [...statics.tauX, ...statics.tauY].filter((plane) => plane >= 0).length;
  return 8 * (9 + 3 + fields);
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
  for (const [nx, ny] of CHECKPOINT_GRIDS) {
    const setup = corvaneOn(nx, ny);
    const run = Integration.start(setup);
    run.advance(20);
    const row = { grid: `${nx}x${ny}`, megabytes: 0, makeSeconds: Infinity, restoreSeconds: Infinity };
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
