import { isDry } from '../stepper/spans';
import type { Model } from '../stepper/model';
import { uniformDetrainment } from '../stepper/nonlinear/half-level';
import type { Stepper } from '../stepper/stepper';
import { sumsAt, type StepRecorder, type StepSums } from '../stepper/sums';
import { KernelHeader } from './fill-workspace';
import { privateModule } from './modules';
import { awaitHelpers, callHelpers, shareSteps, type BandKernel } from './share-steps';
import type { ThreadTeam } from './thread-team';
import { STEPS_A_CALL, STEPS_IN_FLIGHT, type Workspace } from './workspace';

interface KernelExports extends BandKernel {
  advance(header: number): void;
}

/** Levels larger than this, bytes, do not stay in the caches: several steps are then made in one sweep. */
const CACHED_BYTES = 6e6;
/** Below so many water cells a step is shorter than two threads take to meet. */
const LEAST_CELLS_A_THREAD = 1500;
/** Each makes up to four rows of its neighbours too. */
const LEAST_ROWS_A_THREAD = 8;
const HELPERS_START_MS = 60_000;

/** The compiled stepper of a model in kernel memory; null where none suits the model or this machine. */
export function simdStepper(model: Model, team?: ThreadTeam): Stepper | null {
  const { memory, workspace } = model;
  if (!memory || !workspace) return null;
  const { pitch } = model.layout;
  const shared = !(memory.buffer instanceof ArrayBuffer);
  const module = shared ? (team?.module(pitch) ?? null) : privateModule(pitch);
  if (!module) return null;
  const instance = new WebAssembly.Instance(module, { env: { memory } });
  return new SimdStepper(model, workspace, memory, module, instance.exports as unknown as KernelExports, team);
}

class SimdStepper implements Stepper {
  readonly kernel = 'simd';
  threads: number;
  private readonly header: KernelHeader;
  private readonly block: number;
  private readonly sums: StepSums[];
  private readonly ints: Int32Array;
  private enlisted = false;

  constructor(
    private readonly model: Model,
    private readonly workspace: Workspace,
    private readonly memory: WebAssembly.Memory,
    private readonly module: WebAssembly.Module,
    private readonly exports: KernelExports,
    private readonly team: ThreadTeam | undefined,
  ) {
    const { layout, data, sumsPlace, grid } = model;
    this.header = new KernelHeader(model, workspace);
    this.header.fill();
    this.block = 4 * 8 * layout.levelLength > CACHED_BYTES ? STEPS_IN_FLIGHT : 1;
    this.sums = Array.from({ length: workspace.sumSteps }, (_, k) =>
      sumsAt(data, { ...sumsPlace, offset: workspace.sums + k * workspace.sumStride }, grid.ny),
    );
    this.ints = new Int32Array(memory.buffer);
    this.threads = this.affordable();
  }

  advance(steps: number, recorder?: StepRecorder): void {
    const { model, workspace, header, exports } = this;
    if (this.threads > 1 && !this.enlisted) this.enlist();
    const { forcing, data } = model;
    const bases = forcing.bases.length;
    // What is given back is a mean over the basin, to be known before a step begins: one step a call.
    const detrains = model.entrainment?.detrainment === 'uniform';
    const most = detrains ? 1 : recorder ? workspace.sumSteps : STEPS_A_CALL;
    for (let left = steps; left > 0;) {
      const some = Math.min(left, most);
      for (let n = 0; n < some; n++) {
        forcing.factors(model.step + n, model.factors);
        data.set(model.factors, workspace.factors + n * bases);
      }
      header.ask(some, recorder !== undefined, this.block);
      if (detrains) header.detrain(uniformDetrainment(model));
      if (this.threads > 1) {
        callHelpers(this.ints, header.address);
        shareSteps(exports, this.ints, header.address, 0, false);
      } else exports.advance(header.address);
      model.phase = (model.phase + some) & 3;
      model.step += some;
      left -= some;
      if (recorder) for (let n = 0; n < some; n++) recorder.add(this.sums[n]);
    }
  }

  /** Threads of the team that have enough to do; all of them or none beside the caller. */
  private affordable(): number {
    const { model, team, memory } = this;
    if (!team || team.threads < 2 || memory.buffer instanceof ArrayBuffer) return 1;
    const water = waterOfRows(model).reduce((sum, count) => sum + count, 0);
    const most = Math.min(Math.floor(water / LEAST_CELLS_A_THREAD), Math.floor(model.grid.ny / LEAST_ROWS_A_THREAD));
    return most < team.threads ? 1 : team.threads;
  }

  /** Splits the rows over the threads and starts the helpers: not before the first step, for many a run takes none. */
  private enlist(): void {
    const { model, workspace, header, threads, memory, module, team, ints } = this;
    ints.set(bandsOf(waterOfRows(model), threads), (model.data.byteOffset + 8 * workspace.bands) / 4);
    header.set('threads', threads);
    team?.enlist({ module, memory, header: header.address });
    this.enlisted = true;
    if (!awaitHelpers(ints, header.address, threads - 1, HELPERS_START_MS))
      throw new Error('The helper threads of the stepper did not start within 60 s.');
  }

  /** Lets the helpers go; what is stepped afterwards, the caller steps alone. */
  dismiss(): void {
    this.threads = 1;
    if (!this.enlisted) return;
    this.header.set('dismissed', 1);
    callHelpers(this.ints, this.header.address);
  }
}

/** Water cells of each row, and one more for each row that has any: what a row costs. */
function waterOfRows({ grid, spans }: Model): number[] {
  return Array.from({ length: grid.ny }, (_, j) => {
    if (isDry(spans.sweep, j)) return 0;
    let count = 1;
    for (let s = spans.sweep.rowStart[j]; s < spans.sweep.rowStart[j + 1]; s++)
      count += spans.sweep.bounds[2 * s + 1] - spans.sweep.bounds[2 * s];
    return count;
  });
}

/** First rows of the bands of `threads` threads, and the end: about as much water in each, and at least one row. */
export function bandsOf(costs: readonly number[], threads: number): number[] {
  const total = costs.reduce((sum, cost) => sum + cost, 0);
  const bounds = [0];
  let before = 0;
  for (let j = 0; j < costs.length && bounds.length < threads; j++) {
    before += costs[j];
    const next = j + 1;
    const rowsLeft = costs.length - next;
    const bandsLeft = threads - bounds.length;
    if (before >= (total * bounds.length) / threads || rowsLeft === bandsLeft) bounds.push(next);
  }
  bounds.push(costs.length);
  return bounds;
}
