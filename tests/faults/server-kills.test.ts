import { type ChildProcess, fork } from 'node:child_process';
import { readFile, rm } from 'node:fs/promises';
import { join } from 'node:path';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import type { RunQueueEvent } from '@halfdeep/queue';
import { openDesk, Run, RunFileReader, runPaths } from '@halfdeep/store';
import { bundle, lives, newDesk, recordsHash, removeBundle, type Result, scratch, undisturbed, until } from './harness';
import { tinySetup } from './tiny-setup';

const setup = tinySetup(1095);
let calm: Result;
let worker: string;
let program: string;
let varDir: string;
const servers: Server[] = [];
beforeAll(async () => {
  [worker, program] = await Promise.all([bundle('slow-worker'), bundle('engine-server')]);
  calm = await undisturbed(worker, setup);
});
afterEach(async () => {
  for (const server of servers.splice(0)) await server.kill();
  await rm(varDir, { recursive: true, force: true });
});
afterAll(async () => {
  await removeBundle(worker);
  await removeBundle(program);
});

/** One life of the server process, with everything that its queue told. */
class Server {
  readonly events: RunQueueEvent[] = [];
  private readonly child: ChildProcess;
  private readonly gone: Promise<void>;

  constructor(pauseMs: number) {
    this.child = fork(program, [varDir, worker], { env: { ...process.env, TEST_PAUSE_MS: String(pauseMs) } });
    this.child.on('message', (event: RunQueueEvent) => this.events.push(event));
    this.gone = new Promise((resolve) => this.child.once('exit', () => resolve()));
    servers.push(this);
  }

  async kill(signal: NodeJS.Signals = 'SIGKILL'): Promise<void> {
    this.child.kill(signal);
    await this.gone;
  }

  states(runId: string): string[] {
    return this.events.flatMap((event) =>
      event.type === 'state' && event.runId === runId
        ? [event.queuedReason ? `${event.state}: ${event.queuedReason}` : event.state]
        : [],
    );
  }

  /** Newest progress of a run in this life of the server. */
  progress(runId: string) {
    const told = this.events.filter((event) => event.type === 'progress' && event.runId === runId);
    const last = told.at(-1);
    const first = told[0];
    return {
      saved: (last?.type === 'progress' && last.progress.savedStep) || 0,
      frames: last?.type === 'progress' ? last.progress.records.frames : 0,
      began: first?.type === 'progress' ? first.progress.step : -1,
    };
  }
}

/** Queues three runs in a new var folder: two compute at once, one waits. */
async function threeRuns(): Promise<string[]> {
  varDir = await scratch();
  const { desk, addRun } = await newDesk(varDir);
  const ids = [await addRun(setup), await addRun(setup), await addRun(setup)];
  await desk.close();
  return ids;
}

async function rowOf(runId: string): Promise<Run> {
  const desk = await openDesk(join(varDir, 'desk.sqlite'));
  const run = await Run.findByPk(runId);
  await desk.close();
  return run!;
}

/** Process that holds a run's lock, by its own word. */
async function holder(runId: string): Promise<number> {
  return (JSON.parse(await readFile(runPaths(varDir, runId).lock, 'utf8')) as { pid: number }).pid;
}

async function expectAllLikeCalm(ids: string[]): Promise<void> {
  for (const id of ids) {
    const run = await rowOf(id);
    expect([run.state, run.fingerprint?.sha256]).toEqual(['finished', calm.sha256]);
    expect(await recordsHash(varDir, id)).toBe(calm.records);
  }
}

describe('killing the server', () => {
  it('with its workers: the next start goes on with running and waiting work, and nothing committed is lost', async () => {
    const ids = await threeRuns();
    const [a, b, c] = ids;
    const first = new Server(60);
    await until(() => first.progress(a).saved > 0 && first.progress(b).saved > 0 && first.progress(a).frames > 20);
    const workers = [await holder(a), await holder(b)];
    const before = { a: first.progress(a), b: first.progress(b) };
    const killed = first.kill();
    for (const pid of workers) process.kill(pid, 'SIGKILL');
    await killed;
    const states = [(await rowOf(a)).state, (await rowOf(b)).state, (await rowOf(c)).state];
    expect(states).toEqual(['running', 'running', 'queued']);
    const reader = await RunFileReader.open(runPaths(varDir, a).file);
    expect((await reader.watermarks()).frames.records).toBeGreaterThanOrEqual(before.a.frames);
    await reader.close();

    const second = new Server(0);
    await until(() => ids.every((id) => second.states(id).includes('finished')), 90);
    expect(second.states(a)).toEqual(['queued: server stopped', 'running', 'finished']);
    expect(second.states(c)).toEqual(['running', 'finished']);
    expect(second.progress(a).began).toBeGreaterThanOrEqual(before.a.saved);
    expect(second.progress(b).began).toBeGreaterThanOrEqual(before.b.saved);
    await second.kill('SIGTERM');
    await expectAllLikeCalm(ids);
  });

  it('alone: its orphans save and end by themselves, and never write beside their successors', async () => {
    const ids = await threeRuns();
    const [a, b] = ids;
    const first = new Server(60);
    await until(() => first.progress(a).frames > 5 && first.progress(b).frames > 5);
    const orphans = [await holder(a), await holder(b)];
    await first.kill();
    const second = new Server(0);
    await until(() => second.progress(a).began >= 0 && second.progress(b).began >= 0);
    // A successor speaks only when it holds the lock: its orphan has let go by then.
    expect([await holder(a).catch(() => 0), await holder(b).catch(() => 0)]).not.toEqual(orphans);
    await until(() => ids.every((id) => second.states(id).includes('finished')), 90);
    expect(orphans.filter(lives)).toEqual([]);
    await second.kill('SIGTERM');
    await expectAllLikeCalm(ids);
  });

  it('again and again, at any moment, comes to the same in the end', async () => {
    const ids = await threeRuns();
    for (const wait of [150, 900, 1600, 1200, 700]) {
      const server = new Server(40);
      await new Promise((resolve) => setTimeout(resolve, wait));
      await server.kill();
    }
    const last = new Server(0);
    await until(async () => last.events.length > 0 && (await finishedAll(ids)), 120);
    await last.kill('SIGTERM');
    await expectAllLikeCalm(ids);
  });

  it('asked to end, it saves what runs, and the next start goes on from there', async () => {
    const ids = await threeRuns();
    const [a] = ids;
    const first = new Server(60);
    await until(() => first.progress(a).frames > 5);
    const held = await holder(a);
    await first.kill('SIGTERM');
    expect(lives(held)).toBe(false);
    const row = await rowOf(a);
    expect([row.state, row.queuedReason]).toEqual(['queued', 'server stopped']);
    expect(row.progress.savedStep).toBe(row.progress.step);
    const second = new Server(0);
    await until(() => ids.every((id) => second.states(id).includes('finished')), 90);
    expect(second.progress(a).began).toBe(row.progress.savedStep);
    await second.kill('SIGTERM');
    await expectAllLikeCalm(ids);
  });
});

/** True when the desk holds all runs as finished; they may have finished in an earlier life of the server. */
async function finishedAll(ids: string[]): Promise<boolean> {
  for (const id of ids) if ((await rowOf(id)).state !== 'finished') return false;
  return true;
}
