// The server as a process: what it says, what it refuses, how it stops.
import { spawn, type ChildProcess } from 'node:child_process';
import { once } from 'node:events';
import { chmod, mkdir, mkdtemp, readdir, rm, stat, writeFile } from 'node:fs/promises';
import { createServer, type AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { build } from 'esbuild';
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it } from 'vitest';

const root = fileURLToPath(new URL('../../', import.meta.url));
let bundleFolder: string;
let varFolder: string;
const children: ChildProcess[] = [];

beforeAll(async () => {
  // Inside the workspace, so that packages and package.json are found; `var/` is ignored by git.
  await mkdir(join(root, 'var'), { recursive: true });
  bundleFolder = await mkdtemp(join(root, 'var', 'start-tests-'));
  await build({
    entryPoints: [join(root, 'apps/api/src/main.ts')],
    outfile: join(bundleFolder, 'main.mjs'),
    bundle: true,
    platform: 'node',
    target: 'node20',
    format: 'esm',
    packages: 'external',
    tsconfig: join(root, 'tsconfig.base.json'),
    logLevel: 'warning',
  });
});
afterAll(() => rm(bundleFolder, { recursive: true }));
beforeEach(async () => {
  varFolder = await mkdtemp(join(tmpdir(), 'halfdeep-start-'));
});
afterEach(async () => {
  for (const child of children.splice(0)) {
    if (child.exitCode === null && child.signalCode === null) {
      child.kill('SIGKILL');
      await once(child, 'exit');
    }
  }
  await rm(varFolder, { recursive: true, force: true });
});

interface Started {
  child: ChildProcess;
  /** Everything it has said so far, on both streams. */
  said: () => string;
  /** Resolves to the exit code. */
  exit: Promise<number | null>;
}

function start(environment: Record<string, string> = {}): Started {
  const child = spawn(process.execPath, [join(bundleFolder, 'main.mjs')], {
    env: { PATH: process.env['PATH'], HALFDEEP_VAR: varFolder, HALFDEEP_DEMO: 'off', PORT: '0', ...environment },
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  children.push(child);
  let text = '';
  child.stdout.on('data', (chunk: Buffer) => (text += chunk.toString()));
  child.stderr.on('data', (chunk: Buffer) => (text += chunk.toString()));
  const exit = once(child, 'close').then(([code]) => code as number | null);
  return { child, said: () => text, exit };
}

/** The address that the server prints once it answers. */
async function address(started: Started): Promise<string> {
  for (;;) {
    const url = /Halfdeep is at (http:\/\/\S+)/.exec(started.said())?.[1];
    if (url) return url.replace('localhost', '127.0.0.1');
    if (started.child.exitCode !== null) throw new Error(`It ended: ${started.said()}`);
    await new Promise((wake) => setTimeout(wake, 20));
  }
}

describe('the server', () => {
  it('prints its address and the first admin’s link, answers, and stops on SIGTERM with a stream open', async () => {
    const first = start();
    const url = await address(first);
    expect(first.said()).toMatch(
      /Make the first admin here, once, within a day:\n {2}http:\/\/localhost:\d+\/invitation#/,
    );
    expect((await fetch(`${url}/api/health`)).status).toBe(200);
    const token = /#(\S+)/.exec(first.said())![1];
    const json = { 'content-type': 'application/json' };
    const me = { email: 'first@desk.example', password: 'slack water 41 fathoms' };
    const accepted = { method: 'POST', headers: json, body: JSON.stringify({ token, name: 'First', ...me }) };
    expect((await fetch(`${url}/api/invitations/redeem`, accepted)).status).toBe(204);
    const signIn = { method: 'POST', headers: json, body: JSON.stringify(me) };
    const { accessToken } = (await (await fetch(`${url}/api/session?token=1`, signIn)).json()) as {
      accessToken: string;
    };
    const events = await fetch(`${url}/api/events`, { headers: { authorization: `Bearer ${accessToken}` } });
    expect(events.status).toBe(200);
    const ended = events.text();

    first.child.kill('SIGTERM');
    expect(await first.exit).toBe(0);
    expect(await ended).toContain('retry:'); // the stream was closed, not cut
    expect(first.said()).toContain('SIGTERM: saving what runs, then stopping.');
    // Nothing is left open: the log of the database has been taken up.
    expect((await readdir(varFolder)).filter((name) => /-wal$|sock$/.test(name))).toEqual([]);

    const second = start();
    const again = await address(second);
    expect(second.said()).not.toContain('invitation');
    expect((await fetch(`${again}/api/session`, signIn)).status).toBe(200);
  });

  it('says that the port is taken and what to do, and has touched nothing', async () => {
    const other = createServer().listen(0, '127.0.0.1');
    await once(other, 'listening');
    const { port } = other.address() as AddressInfo;
    const refused = start({ PORT: String(port) });
    expect(await refused.exit).toBe(1);
    expect(refused.said()).toContain(`Another program listens on port ${port} of 127.0.0.1.`);
    expect(refused.said()).toContain('set PORT to a free one');
    expect(refused.said()).not.toMatch(/\n\s+at /); // no stack
    expect(await readdir(varFolder)).toEqual([]);
    other.close();
  });

  it('does not start twice on one folder, and does after the first was killed', async () => {
    const first = start();
    await address(first);
    const second = start();
    expect(await second.exit).toBe(1);
    expect(second.said()).toContain(`Another Halfdeep is running on ${varFolder}.`);
    first.child.kill('SIGKILL');
    await first.exit;
    const third = start();
    expect((await fetch(`${await address(third)}/api/health`)).status).toBe(200);
  });

  it('refuses settings that are nonsense, all at once, with a code of its own', async () => {
    const refused = start({ PORT: 'eighty', HALFDEEP_DEMO: 'maybe' });
    expect(await refused.exit).toBe(2);
    expect(refused.said()).toBe(
      'Halfdeep does not start.\n' +
        'PORT must be a whole number from 0 to 65535; “eighty” arrived.\n' +
        'HALFDEEP_DEMO must be “on” or “off”; “maybe” arrived.\n',
    );
  });

  it('refuses to go on with secrets that are damaged, and names the file', async () => {
    await writeFile(join(varFolder, 'secrets.json'), '{"accessKey": "short"}');
    const refused = start();
    expect(await refused.exit).toBe(1);
    expect(refused.said()).toContain(`${join(varFolder, 'secrets.json')} does not hold this server's secrets.`);
  });

  it('makes a folder that is missing, and keeps everything in it from other users', async () => {
    const folder = join(varFolder, 'not', 'there yet');
    const first = start({ HALFDEEP_VAR: folder });
    await address(first);
    expect((await stat(folder)).mode & 0o777).toBe(0o700);
    const names = await readdir(folder);
    expect(names).toEqual(expect.arrayContaining(['desk.sqlite', 'secrets.json']));
    for (const name of names) expect([name, (await stat(join(folder, name))).mode & 0o077]).toEqual([name, 0]);
  });

  it('says so when nothing can be kept where it is told to', async () => {
    const file = join(varFolder, 'file');
    await writeFile(file, '');
    const onFile = start({ HALFDEEP_VAR: file });
    expect(await onFile.exit).toBe(1);
    expect(onFile.said()).toBe(
      `Halfdeep does not start.\nNothing can be kept in ${file}: it is a file, not a folder. ` +
        'Set HALFDEEP_VAR to a folder of your own.\n',
    );
    const below = start({ HALFDEEP_VAR: join(file, 'deeper') });
    expect(await below.exit).toBe(1);
    expect(below.said()).toContain('a part of its path is a file');
    const nowhere = start({ HALFDEEP_VAR: '/proc/halfdeep' });
    expect(await nowhere.exit).toBe(1);
    expect(nowhere.said()).toContain('Nothing can be kept in /proc/halfdeep: no folder can be made there.');
  });

  it.skipIf(process.getuid?.() === 0)('says so when the folder can only be read', async () => {
    await chmod(varFolder, 0o500);
    const refused = start();
    expect(await refused.exit).toBe(1);
    expect(refused.said()).toContain(`Nothing can be kept in ${varFolder}: this user may not write there.`);
    await chmod(varFolder, 0o700);
  });
});
