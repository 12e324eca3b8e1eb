import { createRequire } from 'node:module';
import { fileURLToPath, pathToFileURL } from 'node:url';
import { type WorkerEntry } from '@halfdeep/queue';

/** The worker beside this server: the bundle's own, or its source through tsx when the server runs from source. */
export function workerEntry(here = import.meta.url): WorkerEntry {
  if (!here.endsWith('.ts')) return { path: fileURLToPath(new URL('../worker/main.js', here)) };
  const tsx = pathToFileURL(createRequire(here).resolve('tsx')).href;
  return { path: fileURLToPath(new URL('../../../../worker/src/main.ts', here)), execArgv: ['--import', tsx] };
}
