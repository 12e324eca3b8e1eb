import { type ChildProcess, spawn } from 'node:child_process';
import { existsSync, readFileSync } from 'node:fs';
import { rm } from 'node:fs/promises';
import { join } from 'node:path';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import type { Progress } from '@halfdeep/contracts';
import { allRaw, openSqlite, rawHandle, RunFileReader, runPaths } from '@halfdeep/store';
import { DeskRunLedger } from '../../apps/api/src/runs/desk-run-ledger';
import {
  bundle,
  bundleServer,
  lives,
  newDesk,
  recordsHash,
  removeBundle,
  type Result,
  scratch,
  undisturbed,
  until,
} from './harness';
import { tinySetup } from './tiny-setup';

const setup = tinySetup(730);
let calm: Result;
let program: string;
let varDir = '';
let servers: Server[] = [];
beforeAll(async () => {
  const worker = await bundle('slow-worker');
  calm = await undisturbed(worker, setup);
  await removeBundle(worker);
  program = await bundleServer();
});
afterEach(async () => {
  for (const server of servers) await server.end('SIGKILL');
  servers = [];
  // Workers see their server go and let go of their files by themselves.
  await until(() => workers().every(({ pid }) => !lives(pid)));
  await rm(varDir, { recursive: true, force: true });
});
afterAll(() => removeBundle(program));

/** One life of the real server, on a port of its own. */
class Server {
  private readonly child: ChildProcess;
  private readonly gone: Promise<void>;

  constructor(pauseMs: number) {
    const settings = {
      PORT: '0',
      HALFDEEP_VAR: varDir,
      HALFDEEP_DEMO: 'off',
      HALFDEEP_LOG: 'error',
      HALFDEEP_CHECKPOINT_SECONDS: '0.2',
      TEST_PAUSE_MS: String(pauseMs),
      TEST_TRACE: join(varDir, 'trace'),
    };
    const stdio = ['ignore', 'ignore', 'inherit'] as ['ignore', 'ignore', 'inherit'];
    this.child = spawn(process.execPath, [program], { env: { ...process.env, ...settings }, stdio });
    this.gone = new Promise((resolve) => this.child.once('exit', () => resolve()));
    servers.push(this);
  }

  /** Sends the signal and waits until the process is gone. */
  async end(signal: NodeJS.Signals): Promise<void> {
    this.child.kill(signal);
    await this.gone;
  }
}

interface Row {
  state: string;
  reason: string | null;
  progress: Progress;
  sha256: string | undefined;
}

/** A run as the desk database has it, read beside the server. */
async function rowOf(runId: string): Promise<Row> {
  const sequelize = openSqlite(join(varDir, 'desk.sqlite'), { readOnly: true });
  try {
    const [row] = await allRaw<Record<'state' | 'queued_reason' | 'progress' | 'fingerprint', string | null>>(
      await rawHandle(sequelize),
      'SELECT state, queued_reason, progress, fingerprint FROM runs WHERE id = ?',
      [runId],
    );
    return {
      state: row.state!,
      reason: row.queued_reason,
      progress: JSON.parse(row.progress!) as Progress,
      sha256: row.fingerprint ? (JSON.parse(row.fingerprint) as { sha256: string }).sha256 : undefined,
    };
  } finally {
    await sequelize.close();
  }
}

interface Worker {
  pid: number;
  runId: string;
  /** When it first and last told something, ms. */
  first: number;
  last: number;
  /** Step at which it took the run up. */
  began: number;
  saved: number;
  frames: number;
}

/** All workers that ever spoke in this var folder, in order of their first word; of one run when it is given. */
function workers(runId?: string): Worker[] {
  const trace = join(varDir, 'trace');
  if (!existsSync(trace)) return []; // none has spoken yet
  const found = new Map<number, Worker>();
  for (const line of readFileSync(trace, 'utf8').trim().split('\n')) {
    const told = JSON.parse(line) as {
      pid: number;
      at: number;
      runId: string;
      step: number;
      savedStep: number | null;
      frames: number;
    };
    const { pid, at, step } = told;
    const worker = found.get(pid) ?? { pid, runId: told.runId, first: at, last: at, began: step, saved: 0, frames: 0 };
    found.set(pid, { ...worker, last: at, saved: told.savedStep ?? 0, frames: told.frames });
  }
  return [...found.values()].filter((worker) => runId === undefined || worker.runId === runId);
}
const newest = (runId: string) => workers(runId).at(-1);

/** Queues three runs in a new var folder: two compute at once, one waits. */
async function threeRuns(): Promise<string[]> {
  varDir = await scratch();
  const { desk, addRun } = await newDesk(varDir);
  const settings = { cap: 2, paused: false, whenLowered: 'drain' } as const;
  await new DeskRunLedger(desk, settings).saveSettings(settings);
  const ids = [await addRun(setup), await addRun(setup), await addRun(setup)];
  await desk.close();
  return ids;
}

async function allFinished(ids: string[]): Promise<boolean> {
  for (const id of ids) if ((await rowOf(id)).state !== 'finished') return false;
  return true;
}

/** Every run came to what the undisturbed one did, and no two workers of one run ever overlapped. */
async function expectCalm(ids: string[]): Promise<void> {
  for (const id of ids) {
    const { state, sha256 } = await rowOf(id);
    expect([state, { sha256, records: await recordsHash(varDir, id) }]).toEqual(['finished', calm]);
    const own = workers(id);
    for (let k = 1; k < own.length; k++) {
      expect(own[k].first).toBeGreaterThanOrEqual(own[k - 1].last);
      expect(own[k].began).toBeGreaterThanOrEqual(own[k - 1].saved);
    }
  }
}

describe('killing the server', () => {
  it('with its workers: the next start goes on with running and waiting work, and nothing committed is lost', async () => {
    const [a, b, c] = await threeRuns();
    const first = new Server(120);
    await until(() => [a, b].every((id) => (newest(id)?.saved ?? 0) > 0 && newest(id)!.frames > 10));
    const killed = first.end('SIGKILL');
    const before = workers();
    for (const { pid } of before) process.kill(pid, 'SIGKILL');
    await killed;
    expect([(await rowOf(a)).state, (await rowOf(b)).state, (await rowOf(c)).state]).toEqual([
      'running',
      'running',
      'queued',
    ]);
    for (const { runId, frames } of workers()) {
      const reader = await RunFileReader.open(runPaths(varDir, runId).file);
      expect((await reader.watermarks()).frames.records).toBeGreaterThanOrEqual(frames);
      await reader.close();
    }
    const second = new Server(0);
    await until(() => allFinished([a, b, c]), 90);
    expect([a, b, c].map((id) => workers(id).length)).toEqual([2, 2, 1]);
    expect(newest(a)!.began).toBeGreaterThan(0);
    await second.end('SIGTERM');
    await expectCalm([a, b, c]);
  });

  it('alone: its orphans save and end by themselves, and never write beside their successors', async () => {
    const ids = await threeRuns();
    const first = new Server(120);
    await until(() => workers().length === 2 && workers().every(({ frames }) => frames > 5));
    await first.end('SIGKILL');
    const orphans = workers();
    const second = new Server(0);
    await until(() => allFinished(ids), 90);
    expect(orphans.filter(({ pid }) => lives(pid))).toEqual([]);
    expect(workers()).toHaveLength(5);
    await second.end('SIGTERM');
    await expectCalm(ids);
  });

  it('again and again, at any moment, comes to the same in the end', async () => {
    const ids = await threeRuns();
    for (const wait of [300, 1100, 2600, 1800, 1500]) {
      const server = new Server(40);
      await new Promise((resolve) => setTimeout(resolve, wait));
      await server.end('SIGKILL');
    }
    const last = new Server(0);
    await until(() => allFinished(ids), 120);
    await last.end('SIGTERM');
    await expectCalm(ids);
  });

  it('politely: it saves what runs, and the next start goes on from there', async () => {
    const ids = await threeRuns();
    const first = new Server(120);
    await until(() => workers().length === 2 && workers().every(({ frames }) => frames > 5));
    await first.end('SIGTERM');
    const saved = workers();
    expect(saved.filter(({ pid }) => lives(pid))).toEqual([]);
    for (const { runId, saved: step } of saved) {
      const row = await rowOf(runId);
      expect([row.state, row.reason]).toEqual(['queued', 'server stopped']);
      expect([row.progress.step, row.progress.savedStep]).toEqual([step, step]);
    }
    const second = new Server(0);
    await until(() => allFinished(ids), 90);
    for (const { runId, saved: step } of saved) expect(newest(runId)!.began).toBe(step);
    await second.end('SIGTERM');
    await expectCalm(ids);
  });
});
