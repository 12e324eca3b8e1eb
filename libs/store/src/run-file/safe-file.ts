import { createHash } from 'node:crypto';
import { mkdir, open, readFile, rename } from 'node:fs/promises';
import { folderOf, type RunPaths, unlinkIfThere } from './run-paths';

/** SHA-256 of some bytes, 64 hex digits. */
export const sha256Of = (bytes: Uint8Array): string => createHash('sha256').update(bytes).digest('hex');

/**
 * Writes a file so that it is there whole or not at all: temporary name, fsync, rename, fsync of the folder. Resolves
 * to the SHA-256 of the bytes. The temporary file goes when writing fails (a full disk, for one).
 */
export async function writeWhole(path: string, bytes: Uint8Array): Promise<string> {
  const temporary = `${path}.tmp`;
  try {
    const file = await open(temporary, 'w');
    try {
      await file.writeFile(bytes);
      await file.sync();
    } finally {
      await file.close();
    }
    await rename(temporary, path);
  } catch (error) {
    await unlinkIfThere(temporary);
    throw error;
  }
  const folder = await open(folderOf(path), 'r');
  try {
    await folder.sync();
  } finally {
    await folder.close();
  }
  return sha256Of(bytes);
}

/** A state or checkpoint that is not what was promised. */
export class StateFileError extends Error {
  override readonly name = 'StateFileError';
}

/** Reads a file and holds it against its hash. StateFileError when it is missing or another. */
export async function readVerified(path: string, sha256: string, what: string): Promise<Uint8Array> {
  let bytes: Buffer;
  try {
    bytes = await readFile(path);
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code !== 'ENOENT') throw error;
    throw new StateFileError(`The ${what} is missing: its file is gone.`);
  }
  const found = sha256Of(bytes);
  if (found !== sha256)
    throw new StateFileError(
      `The ${what} is damaged: SHA-256 ${found.slice(0, 12)}… was found, ${sha256.slice(0, 12)}… is right.`,
    );
  return new Uint8Array(bytes.buffer, bytes.byteOffset, bytes.byteLength);
}

/**
 * Copies the last state of a finished run into a new run, when that is queued, so that it stays repeatable when the
 * parent is gone; `which` 'start' copies the state that the parent itself started from, for a repeat of it.
 * StateFileError when the parent's state is missing or not the one that the hash names.
 */
export async function adoptStartState(
  parent: RunPaths,
  child: RunPaths,
  stateSha256: string,
  which: 'last' | 'start' = 'last',
): Promise<void> {
  const what = which === 'last' ? 'last state of the run it starts from' : 'start state of the run that it repeats';
  const state = await readVerified(parent[which], stateSha256, what);
  await mkdir(child.folder, { recursive: true });
  await writeWhole(child.start, state);
}
