// Builds what is stale: the client with Angular's builder, server and worker as bundles with esbuild.
import { pathToFileURL } from 'node:url';
import { join } from 'node:path';
import { root, run } from './run.mjs';
import { buildKernel } from './build-kernel.mjs';
import { digest, isFresh, markBuilt } from './stale.mjs';

const common = [
  'package-lock.json',
  'tsconfig.base.json',
  'libs/workspace/build-kernel.mjs',
  'libs/ocean/src',
  'libs/contracts/src',
];
const inputs = {
  web: [...common, 'angular.json', 'apps/web/tsconfig.app.json', 'apps/web/src', 'apps/web/public', 'fonts'],
  server: [...common, 'libs/store/src', 'libs/queue/src', 'apps/api/src', 'worker/src', 'libs/workspace/build.mjs'],
  integrate: [...common, 'worker/src', 'libs/workspace/build.mjs'],
};

/** Bundles `main.ts` of each folder into `dist/<last part of the folder>/main.js`. */
async function bundle(...folders) {
  const { build } = await import('esbuild');
  const entry = (folder) => ({ in: join(root, folder, 'main.ts'), out: `${nameOf(folder)}/main` });
  await build({
    absWorkingDir: root,
    entryPoints: folders.map(entry),
    outdir: join(root, 'dist'),
    bundle: true,
    platform: 'node',
    target: 'node20',
    format: 'esm',
    sourcemap: true,
    tsconfig: join(root, 'tsconfig.base.json'),
    // Packages of the registry stay in node_modules; our own libraries, found through `paths`, are bundled.
    packages: 'external',
    logLevel: 'warning',
  });
}

const nameOf = (folder) =>
  folder
    .replace(/\/src$/, '')
    .split('/')
    .at(-1);

/** Compiles the stepper and bundles the headless command, where they are stale: it starts ten times as fast as its sources. */
export async function buildIntegrate() {
  await buildKernel();
  const integrate = digest(inputs.integrate);
  if (isFresh('integrate', integrate)) return;
  await bundle('worker/src/integrate');
  markBuilt('integrate', integrate);
}

/** Builds every target that is not fresh. */
export async function buildStale() {
  await buildKernel();
  const server = digest(inputs.server);
  if (!isFresh('server', server)) {
    console.log('Building the server …');
    await bundle('apps/api/src', 'worker/src');
    markBuilt('server', server);
  }
  const web = digest(inputs.web);
  if (!isFresh('web', web)) {
    console.log('Building the client …');
    await run('npx', ['ng', 'build', '--progress=false'], { env: { ...process.env, NG_CLI_ANALYTICS: 'false' } });
    markBuilt('web', web);
  }
}

if (import.meta.url === pathToFileURL(process.argv[1]).href) await buildStale();
