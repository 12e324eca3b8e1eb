import { spawn } from 'node:child_process';
import { existsSync } from 'node:fs';
import { mkdtemp, readFile, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, expect, it, vi } from 'vitest';
import { RunLock } from './run-lock';

vi.setConfig({ testTimeout: 60_000 });

let folder: string;
let path: string;
beforeEach(async () => {
  folder = await mkdtemp(join(tmpdir(), 'run-lock-'));
  path = join(folder, 'runs', 'r.lock');
});
afterEach(() => rm(folder, { recursive: true, force: true }));

it('is held by one at a time and names its holder', async () => {
  const lock = await RunLock.acquire(path);
  expect(JSON.parse(await readFile(path, 'utf8'))).toMatchObject({ pid: process.pid });
  let second = false;
  const waiting = RunLock.acquire(path).then((taken) => {
    second = true;
    return taken;
  });
  await new Promise((resolve) => setTimeout(resolve, 200));
  expect(second).toBe(false);
  await lock.release();
  await (await waiting).release();
  expect(existsSync(path)).toBe(false);
});

it('is taken over from a process that is gone, even when its number was given to another', async () => {
  await RunLock.acquire(path);
  // This very process lives, but started at another time than the holder: a number that was used again.
  await writeFile(path, JSON.stringify({ pid: process.pid, startedAt: 'long ago' }));
  await RunLock.acquire(path, 60_000);
  await writeFile(path, 'half a na');
  await RunLock.acquire(path, 60_000);
  expect(JSON.parse(await readFile(path, 'utf8'))).toMatchObject({ pid: process.pid });
});

it('ends a living holder that does not let go in time', async () => {
  const script = `
    const { RunLock } = await import(${JSON.stringify(new URL('./run-lock.ts', import.meta.url).href)});
    await RunLock.acquire(${JSON.stringify(path)});
    process.stdout.write('held');
    setInterval(() => undefined, 1000);`;
  const holder = spawn(process.execPath, ['--import', 'tsx', '--input-type=module', '-e', script], {
    stdio: ['ignore', 'pipe', 'inherit'],
  });
  const ended = new Promise<string | null>((resolve) => holder.once('exit', (_code, signal) => resolve(signal)));
  await new Promise<void>((resolve) => holder.stdout.once('data', () => resolve()));
  await RunLock.acquire(path, 300);
  expect(await ended).toBe('SIGKILL');
});
