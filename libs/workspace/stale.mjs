// Says whether a built target is older than what it was built from.
import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readFileSync, readdirSync, writeFileSync } from 'node:fs';
import { dirname, join, relative } from 'node:path';
import { root } from './run.mjs';

function* filesUnder(path) {
  for (const entry of readdirSync(path, { withFileTypes: true })) {
    const child = join(path, entry.name);
    if (entry.isDirectory()) {
      if (!['node_modules', 'generated'].includes(entry.name)) yield* filesUnder(child);
    } else if (!/\.(spec|test)\.ts$/.test(entry.name)) yield child;
  }
}

/**
 * SHA-256 over names and contents of everything below the given files and folders; tests and what is generated left out.
 * `takes` may leave out more.
 */
export function digest(paths, takes = () => true) {
  const hash = createHash('sha256').update(process.versions.node);
  for (const path of paths) {
    const full = join(root, path);
    const files = /\.[a-z]+$/.test(path) ? [full] : [...filesUnder(full)].sort();
    for (const file of files.filter(takes)) hash.update(relative(root, file)).update(readFileSync(file));
  }
  return hash.digest('hex');
}

const stampOf = (target) => join(root, 'dist', `.${target}-built-from`);

export function isFresh(target, wanted) {
  return existsSync(stampOf(target)) && readFileSync(stampOf(target), 'utf8') === wanted;
}

export function existsAll(files) {
  return files.every((file) => existsSync(file));
}

export function markBuilt(target, wanted) {
  mkdirSync(dirname(stampOf(target)), { recursive: true });
  writeFileSync(stampOf(target), wanted);
}
