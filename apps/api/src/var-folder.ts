import { accessSync, constants, existsSync, mkdirSync, statSync } from 'node:fs';
import { dirname } from 'node:path';

const REASONS: Record<string, string> = {
  EACCES: 'this user may not write there',
  EPERM: 'this user may not write there',
  EROFS: 'it lies on a disk that can only be read',
  ENOTDIR: 'a part of its path is a file',
  EEXIST: 'it is a file, not a folder',
  ENOENT: 'no folder can be made there',
  ENOSPC: 'the disk is full',
};

/** Folder by folder: Node's own `recursive` never returns where the system takes no folders, as below /proc. */
function makeFolder(folder: string): void {
  if (existsSync(folder)) return;
  if (dirname(folder) !== folder) makeFolder(dirname(folder));
  mkdirSync(folder, { mode: 0o700 });
}

/**
 * Makes the folder that everything is kept in, for its owner alone, if it is not there. Throws, in words, when it cannot
 * be made or written to. A folder that is there keeps its permissions.
 */
export function prepareVarFolder(folder: string): void {
  try {
    makeFolder(folder);
    if (!statSync(folder).isDirectory()) throw Object.assign(new Error(), { code: 'EEXIST' });
    accessSync(folder, constants.R_OK | constants.W_OK | constants.X_OK);
  } catch (error) {
    const reason = REASONS[(error as NodeJS.ErrnoException).code ?? ''];
    if (reason === undefined) throw error;
    throw new Error(`Nothing can be kept in ${folder}: ${reason}. Set HALFDEEP_VAR to a folder of your own.`, {
      cause: error,
    });
  }
}
