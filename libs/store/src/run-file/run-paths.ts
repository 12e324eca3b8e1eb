import { readdir, unlink } from 'node:fs/promises';
import { dirname, join } from 'node:path';

/** Where everything of one run lies. All files of a run start with its id and a full stop. */
export interface RunPaths {
  runId: string;
  /** The folder of all runs. */
  folder: string;
  /** The run file; SQLite keeps `-wal` and `-shm` beside it. */
  file: string;
  /** State copied from another run, from which this one starts. */
  start: string;
  /** Last state of a finished run: what an extension copies. */
  last: string;
  /** Names the process that may write here. */
  lock: string;
  checkpoint(step: number): string;
}

const RUN_ID = /^[A-Za-z0-9_-]+$/;

/** Paths of a run below `varDir`. RangeError when the id could leave the folder. */
export function runPaths(varDir: string, runId: string): RunPaths {
  if (!RUN_ID.test(runId)) throw new RangeError(`A run id has letters, digits, - and _ only; “${runId}” arrived.`);
  const folder = join(varDir, 'runs');
  const at = (ending: string) => join(folder, `${runId}.${ending}`);
  return {
    runId,
    folder,
    file: at('sqlite'),
    start: at('start'),
    last: at('last'),
    lock: at('lock'),
    checkpoint: (step) => at(`${step}.checkpoint`),
  };
}

/** Absolute paths of all files that a run has on disk; empty when there are none. */
export async function listRunFiles(paths: RunPaths): Promise<string[]> {
  const names = await readdir(paths.folder).catch((error: NodeJS.ErrnoException) => {
    if (error.code === 'ENOENT') return [];
    throw error;
  });
  return names.filter((name) => name.startsWith(`${paths.runId}.`)).map((name) => join(paths.folder, name));
}

/**
 * Unlinks everything of a run. The caller has stopped its worker and closed every reader first (SQLite writes to an
 * unlinked file without complaint). Resolves to the number of files that went.
 */
export async function deleteRunFiles(paths: RunPaths): Promise<number> {
  const files = await listRunFiles(paths);
  for (const file of files) await unlinkIfThere(file);
  return files.length;
}

/** Unlinks a file; a missing one is fine. */
export async function unlinkIfThere(path: string): Promise<void> {
  await unlink(path).catch((error: NodeJS.ErrnoException) => {
    if (error.code !== 'ENOENT') throw error;
  });
}

/** Folder part of a path, for fsync after a rename. */
export const folderOf = (path: string): string => dirname(path);
