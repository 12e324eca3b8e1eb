const FULL = new Set(['ENOSPC', 'EDQUOT', 'SQLITE_FULL']);
const DAMAGED = new Set(['SQLITE_CORRUPT', 'SQLITE_NOTADB']);

/** True when an error, or one that caused it, says that no space is left. */
export const isDiskFull = (error: unknown): boolean => hasCode(error, FULL);

/** True when SQLite says that a file is not what it was. */
export const isDamagedFile = (error: unknown): boolean => hasCode(error, DAMAGED);

/** Looks along the chain of causes; Sequelize keeps its own in `parent`. */
function hasCode(error: unknown, codes: Set<string>): boolean {
  for (let at = error; at instanceof Error; at = at.cause ?? (at as { parent?: unknown }).parent)
    if (codes.has((at as NodeJS.ErrnoException).code ?? '')) return true;
  return false;
}
