import { build } from 'esbuild';
import { createHash, randomUUID } from 'node:crypto';
import { existsSync, readFileSync } from 'node:fs';
import { mkdir, mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join, relative, sep } from 'node:path';
import { fileURLToPath } from 'node:url';
import type { Preflight, Setup } from '@halfdeep/ocean';
import { EmbeddedQueue, type EmbeddedQueueOptions, type RunQueueEvent } from '@halfdeep/queue';
import { type DeskDatabase, Experiment, openDesk, Person, Run, RunFileReader, runPaths } from '@halfdeep/store';
import { DeskRunLedger } from '../../apps/api/src/runs/desk-run-ledger';

const root = fileURLToPath(new URL('../../', import.meta.url));

/** Bundles one of the workers beside this file as the build does; resolves to the bundle's path. */
export async function bundle(name: 'slow-worker' | 'deadly-worker'): Promise<string> {
  const folder = bundleFolder();
  await bundleInto(folder, { [name]: `tests/faults/${name}.ts` });
  return join(folder, `${name}.js`);
}

/** Bundles the whole server, with the slow worker where it looks for its worker; resolves to the server's path. */
export async function bundleServer(): Promise<string> {
  const folder = bundleFolder();
  await bundleInto(folder, { 'api/main': 'apps/api/src/main.ts', 'worker/main': 'tests/faults/slow-worker.ts' });
  return join(folder, 'api/main.js');
}

/** Removes the folder that a bundle was written to. */
export async function removeBundle(path: string): Promise<void> {
  const [folder] = relative(join(root, 'var'), path).split(sep);
  await rm(join(root, 'var', folder), { recursive: true, force: true });
}

/** Inside the workspace, so that packages are found from there. */
const bundleFolder = () => join(root, 'var', `faults-${randomUUID()}`);

async function bundleInto(outdir: string, entries: Record<string, string>): Promise<void> {
  await mkdir(outdir, { recursive: true });
  await build({
    absWorkingDir: root,
    entryPoints: Object.entries(entries).map(([out, path]) => ({ in: join(root, path), out })),
    outdir,
    bundle: true,
    platform: 'node',
    target: 'node20',
    format: 'esm',
    packages: 'external',
    tsconfig: join(root, 'tsconfig.base.json'),
    logLevel: 'warning',
  });
}

/** A folder for databases and runs, and how to get rid of it. */
export async function scratch(): Promise<string> {
  return mkdtemp(join(tmpdir(), 'halfdeep-faults-'));
}

/** Makes the desk database with one person and one experiment. */
export async function newDesk(varDir: string): Promise<{ desk: DeskDatabase; addRun: AddRun }> {
  const desk = await openDesk(join(varDir, 'desk.sqlite'));
  const [owner, experiment] = [randomUUID(), randomUUID()];
  const at = new Date();
  await desk.write(async (transaction) => {
    await Person.create(
      { id: owner, name: 'Ann', email: 'ann@x.example', state: 'invited', passwordHash: null, createdAt: at },
      { transaction },
    );
    await Experiment.create(
      { id: experiment, ownerId: owner, question: 'Does it hold?', notes: '', createdAt: at, movedAt: at, moved: '' },
      { transaction },
    );
  });
  let made = 0;
  const addRun: AddRun = async (setup) => {
    const id = randomUUID();
    await desk.write((transaction) =>
      Run.create(
        {
          id,
          experimentId: experiment,
          ownerId: owner,
          label: `Run ${++made}`,
          setup,
          preflight: {} as Preflight,
          nx: 30,
          ny: 20,
          parentRunId: null,
          parentLabel: null,
          descent: 'control',
          changes: [],
          state: 'queued',
          queuedReason: null,
          queueOrder: made,
          failure: null,
          deaths: 0,
          createdAt: new Date(),
          queuedAt: new Date(),
          startedAt: null,
          endedAt: null,
          progress: {
            step: 0,
            totalSteps: 0,
            startStep: 0,
            day: 0,
            totalDays: 0,
            cellStepsPerSecond: null,
            secondsLeft: null,
            records: { frames: 0, sections: 0, moorings: 0, budget: 0 },
            savedStep: null,
            cautions: [],
          },
          fingerprint: null,
          stateSha256: null,
          lastStep: null,
          diskBytes: null,
          workerPid: null,
        },
        { transaction },
      ),
    );
    return id;
  };
  return { desk, addRun };
}
/** Writes a queued run; resolves to its id. */
export type AddRun = (setup: Setup) => Promise<string>;

/** A desk with its queue in this process. */
export class Bench {
  readonly events: RunQueueEvent[] = [];
  private constructor(
    readonly varDir: string,
    readonly desk: DeskDatabase,
    readonly queue: EmbeddedQueue,
    private readonly addRun: AddRun,
    readonly ledger: DeskRunLedger,
  ) {
    queue.events$.subscribe((event) => this.events.push(event));
  }

  static async open(worker: string, options: Partial<EmbeddedQueueOptions> = {}, pauseMs = 0): Promise<Bench> {
    const varDir = await scratch();
    const { desk, addRun } = await newDesk(varDir);
    const ledger = new DeskRunLedger(desk, { cap: 1, paused: false, whenLowered: 'drain' });
    const entry = { path: worker, env: { TEST_PAUSE_MS: String(pauseMs) } };
    const queue = new EmbeddedQueue({ ledger, varDir, worker: entry, checkpointSeconds: 0.2, ...options });
    const bench = new Bench(varDir, desk, queue, addRun, ledger);
    await queue.start();
    return bench;
  }

  async add(setup: Setup): Promise<string> {
    const id = await this.addRun(setup);
    await this.queue.enqueue(id);
    return id;
  }

  async state(runId: string): Promise<string> {
    return (await this.row(runId)).state;
  }

  async row(runId: string): Promise<Run> {
    const run = await Run.findByPk(runId);
    if (!run) throw new Error(`There is no run ${runId}.`);
    return run;
  }

  /** Resolves to the row when the run has finished; throws when it ends in another way. */
  async finished(runId: string, seconds = 90): Promise<Run> {
    await until(async () => !['queued', 'running'].includes(await this.state(runId)), seconds);
    const run = await this.row(runId);
    if (run.state !== 'finished') throw new Error(`The run is ${run.state}: ${JSON.stringify(run.failure)}`);
    await this.queue.released(runId);
    return run;
  }

  /** States that were told of a run, with reasons. */
  states(runId: string): string[] {
    return this.events.flatMap((event) =>
      event.type === 'state' && event.runId === runId
        ? [event.queuedReason ? `${event.state}: ${event.queuedReason}` : event.state]
        : [],
    );
  }

  /**
   * For each time that a run was taken up again: the last saved step that had been told before, and the step at which
   * the next worker began.
   */
  resumptions(runId: string): { saved: number; began: number }[] {
    const found: { saved: number; began: number }[] = [];
    let saved = 0;
    let starting = false;
    for (const event of this.events) {
      if (event.type === 'state' && event.runId === runId && event.state === 'running') starting = true;
      if (event.type !== 'progress' || event.runId !== runId) continue;
      if (starting) found.push({ saved, began: event.progress.step });
      starting = false;
      saved = event.progress.savedStep ?? saved;
    }
    return found.slice(1);
  }

  async close(): Promise<void> {
    await this.queue.close();
    await this.desk.close();
    await rm(this.varDir, { recursive: true, force: true });
  }
}

/** What a run comes to. */
export interface Result {
  sha256: string;
  records: string;
}

/** What an undisturbed run of a setup comes to, computed on a bench of its own. */
export async function undisturbed(worker: string, setup: Setup): Promise<Result> {
  const bench = await Bench.open(worker, { checkpointSeconds: 600 });
  try {
    return await resultOf(bench, await bench.add(setup));
  } finally {
    await bench.close();
  }
}

/** Waits for a run's end; resolves to fingerprint and records. */
export async function resultOf(bench: Bench, runId: string): Promise<Result> {
  const { fingerprint } = await bench.finished(runId);
  return { sha256: fingerprint!.sha256, records: await recordsHash(bench.varDir, runId) };
}

/** SHA-256 over every frame and every record of a run file from record `from` days on. */
export async function recordsHash(varDir: string, runId: string, fromDay = -1): Promise<string> {
  const reader = await RunFileReader.open(runPaths(varDir, runId).file);
  const hash = createHash('sha256');
  const marks = await reader.watermarks();
  for (const variable of ['eta', 'u', 'v'] as const)
    for (let record = 0; record < marks.frames.records; record++) {
      if (reader.dayOf('frames', record) <= fromDay) continue;
      const { data } = await reader.readMap(variable, record);
      hash.update(new Uint8Array(data.buffer, data.byteOffset, data.byteLength));
    }
  for (const stream of ['sections', 'moorings', 'budget'] as const) {
    const { records } = marks[stream];
    let first = 0;
    while (first < records && reader.dayOf(stream, first) <= fromDay) first++;
    const { data } = await reader.readSeries(stream, first, records);
    hash.update(`${stream} ${records - first}`).update(new Uint8Array(data.buffer, data.byteOffset, data.byteLength));
  }
  await reader.close();
  return hash.digest('hex');
}

export async function until(what: () => boolean | Promise<boolean>, seconds = 60): Promise<void> {
  const deadline = Date.now() + seconds * 1000;
  while (!(await what())) {
    if (Date.now() > deadline) throw new Error(`Not within ${seconds} s: ${what.toString()}`);
    await new Promise((resolve) => setTimeout(resolve, 20));
  }
}

/** True while a process with this id lives. A zombie, which nobody has collected yet, does not. */
export function lives(pid: number): boolean {
  try {
    process.kill(pid, 0);
    const stat = existsSync('/proc/self/stat') ? readFileSync(`/proc/${pid}/stat`, 'utf8') : '';
    return !/\) Z /.test(stat);
  } catch {
    return false; // there is none
  }
}
