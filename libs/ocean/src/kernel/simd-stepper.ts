import { isDry } from '../stepper/spans';
import type { Model } from '../stepper/model';
import { uniformDetrainment } from '../stepper/nonlinear/half-level';
import type { Stepper } from '../stepper/stepper';
import { sumsAt, type StepRecorder, type StepSums } from '../stepper/sums';
import { COMMAND, KernelHeader, READY } from './fill-workspace';
import { privateModule } from './modules';
import type { ThreadTeam } from './thread-team';
import { STEPS_A_CALL, STEPS_IN_FLIGHT, type Workspace } from './workspace';

interface KernelExports {
  advance(header: number): void;
  band(header: number, thread: number): void;
  call(header: number): void;
}

/** Levels larger than this, bytes, do not stay in the caches: several steps are then made in one sweep. */
const CACHED_BYTES = 6e6;
/** Below so many water cells a step is shorter than two threads take to meet. */
const LEAST_CELLS_A_THREAD = 1500;
const HELPERS_START_MS = 20_000;

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
  readonly threads: number;
  private readonly header: KernelHeader;
  private readonly block: number;
  private readonly sums: StepSums[];

  constructor(
    private readonly model: Model,
    private readonly workspace: Workspace,
    memory: WebAssembly.Memory,
    module: WebAssembly.Module,
    private readonly kernel_: KernelExports,
    team: ThreadTeam | undefined,
  ) {
    const { layout, data, sumsPlace, grid } = model;
    this.header = new KernelHeader(model, workspace);
    this.header.fill();
    this.block = 4 * 8 * layout.levelLength > CACHED_BYTES ? STEPS_IN_FLIGHT : 1;
    this.sums = Array.from({ length: workspace.sumSteps }, (_, k) =>
      sumsAt(data, { ...sumsPlace, offset: workspace.sums + k * workspace.sumStride }, grid.ny),
    );
    this.threads = this.enlist(memory, module, team);
  }

  advance(steps: number, recorder?: StepRecorder): void {
    const { model, workspace, header, kernel_ } = this;
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
        kernel_.call(header.address);
        kernel_.band(header.address, 0);
      } else kernel_.advance(header.address);
      model.phase = (model.phase + some) & 3;
      model.step += some;
      left -= some;
      if (recorder) for (let n = 0; n < some; n++) recorder.add(this.sums[n]);
    }
  }

  /** Splits the rows over the threads of a team and starts its helpers; answers how many step. */
  private enlist(memory: WebAssembly.Memory, module: WebAssembly.Module, team: ThreadTeam | undefined): number {
    const { model, workspace, header } = this;
    const cells = waterOfRows(model);
    const water = cells.reduce((sum, count) => sum + count, 0);
    const affordable = Math.min(Math.floor(water / LEAST_CELLS_A_THREAD), Math.floor(model.grid.ny / 2));
    if (!team || team.threads < 2 || affordable < team.threads || memory.buffer instanceof ArrayBuffer) return 1;
    const ints = new Int32Array(memory.buffer);
    ints.set(bandsOf(cells, team.threads), (model.data.byteOffset + 8 * workspace.bands) / 4);
    header.set('threads', team.threads);
    team.enlist({ module, memory, header: header.address });
    const ready = (header.address + READY) / 4;
    const until = performance.now() + HELPERS_START_MS;
    for (let there = 0; there < team.threads - 1; there = Atomics.load(ints, ready)) {
      const wait = until - performance.now();
      if (wait <= 0) throw new Error(`${team.threads - 1 - there} helper threads did not start within 20 s.`);
      Atomics.wait(ints, ready, there, wait);
    }
    return team.threads;
  }

  /** Lets the helpers go; the stepper steps no more. */
  dismiss(): void {
    if (this.threads < 2) return;
    this.header.ask(0, false, 1);
    const ints = new Int32Array(this.model.data.buffer);
    Atomics.add(ints, (this.header.address + COMMAND) / 4, 1);
    Atomics.notify(ints, (this.header.address + COMMAND) / 4);
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
