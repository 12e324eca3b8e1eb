import { spawn, spawnSync, type ChildProcessWithoutNullStreams } from 'node:child_process';
import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import type { Model } from '@halfdeep/ocean';
import type { Spans } from '../../libs/ocean/src/stepper/spans';

const SOURCES = fileURLToPath(new URL('reference/', import.meta.url));
const STEPPER_FILES = ['child.c', 'common.c', 'linear.c', 'nonlinear.c'];
const WARNINGS = ['-std=c99', '-Wall', '-Wextra'];

/** What a chunk of steps took, s. */
export interface Spent {
  cpu: number;
  wall: number;
}

/** The C reference, compiled for this bench in a folder of its own; `remove` deletes it. */
export interface NativePrograms {
  /** First line of `gcc --version`. */
  compiler: string;
  /** gcc -O3 -march=native and gcc -O3, both without contraction to fused multiply-add. */
  native: string;
  sse2: string;
  /** STREAM's triad. */
  stream: string;
  remove: () => Promise<void>;
}

/** Compiles the C reference; null where there is no gcc. Throws with the compiler's words when a source does not compile. */
export async function compileReference(): Promise<NativePrograms | null> {
  const version = spawnSync('gcc', ['--version'], { encoding: 'utf8' });
  if (version.error || version.status !== 0) return null;
  const folder = await mkdtemp(join(tmpdir(), 'halfdeep-bench-c-'));
  const compile = (name: string, flags: string[], files: string[]) => {
    const path = join(folder, name);
    const sources = files.map((file) => join(SOURCES, file));
    const done = spawnSync('gcc', [...WARNINGS, ...flags, '-o', path, ...sources, '-lm'], { encoding: 'utf8' });
    if (done.status !== 0) throw new Error(`gcc did not compile ${files.join(', ')}: ${done.stderr}`);
    return path;
  };
  const remove = () => rm(folder, { recursive: true, force: true });
  try {
    return {
      compiler: version.stdout.split('\n')[0],
      native: compile('native', ['-O3', '-march=native', '-ffp-contract=off'], STEPPER_FILES),
      sse2: compile('sse2', ['-O3', '-ffp-contract=off'], STEPPER_FILES),
      stream: compile('stream', ['-O3', '-march=native'], ['stream.c']),
      remove,
    };
  } catch (error) {
    await remove();
    throw error;
  }
}

/** Bandwidth of one core in bytes a second by STREAM's triad, on arrays of `doubles` numbers each. */
export function streamBandwidth({ stream }: NativePrograms, doubles: number): number {
  const done = spawnSync(stream, [String(doubles)], { encoding: 'utf8' });
  const bandwidth = Number(done.stdout);
  if (done.status !== 0 || !(bandwidth > 0))
    throw new Error(`The triad did not end well: ${done.stdout}${done.stderr}`);
  return bandwidth;
}

const KEEP_MEMORY = { MALLOC_TRIM_THRESHOLD_: '1000000000', MALLOC_MMAP_THRESHOLD_: '1000000000' };
const LOAD = 1n;
const RUN = 2n;
const READ = 3n;

let hasNumPy: boolean | null = null;

/** How to start the NumPy reference; null where there is no Python with NumPy. */
export function numpyCommand(style: 'out' | 'plain'): readonly string[] | null {
  hasNumPy ??= spawnSync('python3', ['-c', 'import numpy'], { stdio: 'ignore' }).status === 0;
  return hasNumPy ? ['python3', join(SOURCES, 'child.py'), style] : null;
}

/** A model stepped by a reference in another language, in a child process that waits for commands. */
export class NativeStepper {
  readonly #child: ChildProcessWithoutNullStreams;
  readonly #model: Model;
  #step: number;
  #waiting: { resolve: (answer: Buffer) => void; reject: (error: Error) => void } | null = null;
  #chunks: Buffer[] = [];
  #arrived = 0;
  #complaint = '';

  private constructor(command: readonly string[], model: Model) {
    this.#model = model;
    this.#step = model.step;
    // No files beside the sources; and memory that NumPy frees stays with it, or it would spend its time on page faults.
    this.#child = spawn(command[0], command.slice(1), {
      stdio: 'pipe',
      env: { ...process.env, PYTHONDONTWRITEBYTECODE: '1', OMP_NUM_THREADS: '1', ...KEEP_MEMORY },
    });
    this.#child.stderr.on('data', (text: Buffer) => (this.#complaint += text.toString()));
    this.#child.stdout.on('data', (bytes: Buffer) => this.#take(bytes));
    this.#child.on('error', (error) => this.#waiting?.reject(error));
    this.#child.on('exit', (code) =>
      this.#waiting?.reject(new Error(`The reference ended with ${code}: ${this.#complaint}`)),
    );
  }

  /**
   * Starts a child (a compiled program, or `numpyCommand`) with the state and the coefficients of a model. Throws
   * RangeError for what the references lack.
   */
  static async start(command: readonly string[], model: Model): Promise<NativeStepper> {
    const message = loadMessage(model);
    const stepper = new NativeStepper(command, model);
    await stepper.#ask(LOAD, message);
    return stepper;
  }

  /** Makes `steps` steps; the time is the child's own, from the first step to the last. */
  async run(steps: number): Promise<Spent> {
    const { forcing } = this.#model;
    const count = forcing.bases.length;
    const message = Buffer.alloc(8 + 8 * steps * count);
    message.writeBigInt64LE(BigInt(steps));
    const factors = new Float64Array(message.buffer, message.byteOffset + 8, steps * count);
    for (let n = 0; n < steps; n++) forcing.factors(this.#step + n, factors.subarray(n * count, (n + 1) * count));
    const answer = await this.#ask(RUN, message);
    this.#step += steps;
    return { cpu: answer.readDoubleLE(0), wall: answer.readDoubleLE(8) };
  }

  /** Phase and the four levels, as they lie in the model's memory. */
  async levels(): Promise<{ phase: number; levels: Float64Array[] }> {
    const answer = await this.#ask(READ, Buffer.alloc(0));
    const { levelLength } = this.#model.layout;
    const all = new Float64Array(answer.buffer.slice(answer.byteOffset + 8, answer.byteOffset + answer.length));
    const levels = [0, 1, 2, 3].map((k) => all.subarray(k * levelLength, (k + 1) * levelLength));
    return { phase: Number(answer.readBigInt64LE(0)), levels };
  }

  /** Ends the child. */
  close(): Promise<void> {
    return new Promise((resolve) => {
      if (this.#child.exitCode !== null) return resolve();
      this.#child.once('exit', () => resolve());
      this.#child.stdin.end();
    });
  }

  #ask(code: bigint, message: Buffer): Promise<Buffer> {
    return new Promise((resolve, reject) => {
      this.#waiting = { resolve, reject };
      const head = Buffer.alloc(16);
      head.writeBigUInt64LE(code, 0);
      head.writeBigUInt64LE(BigInt(message.length), 8);
      this.#child.stdin.write(head);
      this.#child.stdin.write(message);
    });
  }

  #take(bytes: Buffer): void {
    this.#chunks.push(bytes);
    this.#arrived += bytes.length;
    if (this.#arrived < 8) return;
    const first = this.#chunks[0].length < 8 ? Buffer.concat(this.#chunks) : this.#chunks[0];
    const length = 8 + Number(first.readBigUInt64LE(0));
    if (this.#arrived < length) return;
    const all = Buffer.concat(this.#chunks);
    this.#chunks = [];
    this.#arrived = 0;
    this.#waiting?.resolve(all.subarray(8));
  }
}

/** Everything that the C code needs of a model: int64 first, then doubles; the order is that of child.c. */
function loadMessage(model: Model): Buffer {
  const { grid, layout, statics, spans, coastCorners, rows, forcing, entrainment } = model;
  if (statics.viscosityCell >= 0 || statics.spongeCell >= 0)
    throw new RangeError('The references have one viscosity and one drag: no map of viscosity and no sponges.');
  const list = (values: ArrayLike<number>) => [values.length, ...Array.from(values)];
  const runs = ({ rowStart, bounds }: Spans) => [...list(rowStart), ...list(bounds)];
  const integers = [
    model.equations === 'nonlinear' ? 1 : 0,
    grid.nx,
    grid.ny,
    layout.pitch,
    grid.periodic ? 1 : 0,
    model.slip === 'none' ? 1 : 0,
    model.phase,
    forcing.bases.length,
    layout.ringPlanes,
    model.stress,
    entrainment ? 1 : 0,
    entrainment?.detrainment === 'uniform' ? 1 : 0,
    ...layout.levels,
    layout.levelLength,
    layout.ring,
    model.data.length,
    ...list(statics.tauX),
    ...list(statics.tauY),
    ...runs(spans.cells),
    ...runs(spans.uPoints),
    ...runs(spans.vPoints),
    ...runs(spans.sweep),
    ...runs(spans.bare),
    ...runs(spans.corners),
    ...list(coastCorners.rowStart),
    ...list(coastCorners.columns),
  ];
  const perRow = (values: Float64Array | null) => {
    const row = new Float64Array(grid.ny + 1);
    if (values) row.set(values);
    return row;
  };
  const { perDxC, perDxV, divNorth, divSouth, curlNorth, curlSouth, coriolisSouth, coriolisNorth, coriolisV } = rows;
  const { turnSouth, turnNorth, shareSouth, shareNorth } = rows;
  const doubles = [
    Float64Array.of(
      model.dt,
      model.reducedGravity,
      model.restThickness,
      model.density,
      model.rayleigh,
      model.viscosity,
      model.damping,
      grid.dy,
      model.minimumThickness,
      entrainment?.onsetThickness ?? 0,
      entrainment?.timescale ?? 1,
      model.stressFloor,
    ),
    ...[perDxC, perDxV, divNorth, divSouth, curlNorth, curlSouth, coriolisSouth, coriolisNorth, coriolisV],
    ...[turnSouth, turnNorth, shareSouth, shareNorth, grid.f, grid.dxC].map(perRow),
    ...forcing.bases.map(({ tauxRow }) => perRow(tauxRow)),
    ...forcing.bases.map(({ tauyRow }) => perRow(tauyRow)),
    coastCorners.perWet,
    model.data,
  ];
  const counted = BigInt64Array.from([integers.length + 1, ...integers], BigInt);
  return Buffer.concat(
    [counted, ...doubles].map((values) => Buffer.from(values.buffer, values.byteOffset, values.byteLength)),
  );
}

/**
 * Sentence about the first number that differs between a model's levels and a child's, or null when all bits are the
 * same. NumPy multiplies by masks, which leaves −0 on land: `zeros` 'alike' takes that as 0, as every step after does.
 */
export async function differenceFrom(
  model: Model,
  stepper: NativeStepper,
  zeros: 'exact' | 'alike' = 'exact',
): Promise<string | null> {
  const same = (a: number, b: number) => Object.is(a, b) || (zeros === 'alike' && a === b);
  const { phase, levels } = await stepper.levels();
  if (phase !== model.phase) return `phase ${phase} against ${model.phase}`;
  const { layout, data } = model;
  for (let k = 0; k < 4; k++) {
    const ours = data.subarray(layout.levels[k], layout.levels[k] + layout.levelLength);
    const at = levels[k].findIndex((value, n) => !same(value, ours[n]));
    if (at < 0) continue;
    const row = Math.floor(at / layout.record) - 1;
    const plane = Math.floor((at % layout.record) / layout.pitch);
    return `level ${k}, plane ${plane}, row ${row}, column ${(at % layout.pitch) - 2}: ${levels[k][at]} against ${ours[at]}`;
  }
  return null;
}
