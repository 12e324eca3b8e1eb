import { createHash } from 'node:crypto';
import { unlinkSync } from 'node:fs';
import { connect, createServer } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';

/** Longest path of a socket that every Unix takes. */
const LONGEST_PATH = 100;

/**
 * Makes sure that this is the only server on a var folder: two would write into each other's runs. A socket that answers
 * means that another lives; one that does not was left by a server that was killed. Returns what gives the folder back.
 * Throws when it is taken.
 */
export async function claimFolder(varFolder: string): Promise<() => Promise<void>> {
  const near = join(varFolder, 'server.sock');
  const name = createHash('sha256').update(varFolder).digest('hex').slice(0, 16);
  const path = near.length <= LONGEST_PATH ? near : join(tmpdir(), `halfdeep-${name}.sock`);
  if (await answers(path))
    throw new Error(`Another Halfdeep is running on ${varFolder}. Stop it, or set HALFDEEP_VAR to another folder.`);
  try {
    unlinkSync(path);
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code !== 'ENOENT') throw error;
  }
  const server = createServer((socket) => socket.end());
  await new Promise<void>((resolve, reject) => {
    server.once('error', reject);
    server.listen(path, resolve);
  });
  server.unref();
  return () => new Promise((resolve) => server.close(() => resolve()));
}

function answers(path: string): Promise<boolean> {
  return new Promise((resolve) => {
    const socket = connect(path);
    const done = (lives: boolean) => {
      socket.destroy();
      resolve(lives);
    };
    socket.once('connect', () => done(true));
    socket.once('error', () => done(false)); // nobody there, or nobody listening
  });
}
