// Compiles the SIMD stepper (libs/ocean/src/kernel/*.as.ts) to WebAssembly: one module for each pitch and each kind of
// memory, written as base64 into git-ignored TypeScript files, so that server, worker, tests and browser import them
// alike. Does nothing while they are newer than what they were made from.
import { Buffer } from 'node:buffer';
import { spawn } from 'node:child_process';
import { mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import { root } from './run.mjs';
import { digest, existsAll, isFresh, markBuilt } from './stale.mjs';

/** The pitches of layout.ts; a spec holds the two lists against each other. */
export const PITCHES = [136, 264, 520, 1032, 2056, 4104];
const KINDS = ['private', 'shared'];

const folder = join(root, 'libs', 'ocean', 'src', 'kernel');
const generated = join(folder, 'generated');
const fileOf = (kind) => join(generated, `${kind}-modules.ts`);

/** Compiles one module and resolves to its bytes. */
async function compile(kind, pitch) {
  const asc = await import('assemblyscript/asc');
  let binary = null;
  const { error, stderr } = await asc.main(
    [
      `${kind}.as.ts`,
      ...['-O3', '--converge', '--noAssert', '--runtime', 'stub', '--enable', 'simd', '--importMemory'],
      ...['--initialMemory', '1', '--maximumMemory', '65536', '--memoryBase', '1024', '--outFile', 'module.wasm'],
      ...(kind === 'shared' ? ['--enable', 'threads', '--sharedMemory'] : []),
    ],
    {
      readFile: (name) => {
        if (name === 'pitch.as.ts') return `export const PITCH: usize = ${pitch};\n`;
        try {
          return readFileSync(join(folder, name), 'utf8');
        } catch (reason) {
          if (reason.code !== 'ENOENT') throw reason;
          return null; // the compiler tries several names
        }
      },
      writeFile: (_name, contents) => {
        binary = contents;
      },
    },
  );
  if (error) throw new Error(`The kernel (${kind}, pitch ${pitch}) does not compile:\n${stderr.toString()}`);
  return binary;
}

/** Compiles all modules of a kind in a process of its own: the compiler is slow until it has compiled once. */
function compileApart(kind) {
  return new Promise((resolve, reject) => {
    const child = spawn(process.execPath, [fileURLToPath(import.meta.url), kind], {
      stdio: ['ignore', 'pipe', 'inherit'],
    });
    let printed = '';
    child.stdout.setEncoding('utf8').on('data', (chunk) => (printed += chunk));
    child.on('error', reject);
    child.on('close', (code) =>
      code === 0 ? resolve(JSON.parse(printed)) : reject(new Error(`Compiling the ${kind} kernel failed.`)),
    );
  });
}

/** Compiles the modules that are stale. */
export async function buildKernel() {
  const wanted = digest(['libs/ocean/src/kernel', 'libs/workspace/build-kernel.mjs'], (file) =>
    /(\.as\.ts|build-kernel\.mjs)$/.test(file),
  );
  if (isFresh('kernel', wanted) && existsAll(KINDS.map(fileOf))) return;
  console.log('Compiling the stepper …');
  const modules = await Promise.all(KINDS.map(compileApart));
  mkdirSync(generated, { recursive: true });
  for (const [k, kind] of KINDS.entries()) {
    const lines = PITCHES.map((pitch) => `  ${pitch}: '${modules[k][pitch]}',`);
    writeFileSync(
      fileOf(kind),
      `// Made by libs/workspace/build-kernel.mjs from libs/ocean/src/kernel/*.as.ts.\n` +
        `/** WebAssembly modules by pitch, base64. */\n` +
        `export const ${kind.toUpperCase()}_MODULES: Readonly<Record<number, string>> = {\n${lines.join('\n')}\n};\n`,
    );
  }
  markBuilt('kernel', wanted);
}

if (import.meta.url === pathToFileURL(process.argv[1]).href) {
  const kind = process.argv[2];
  if (kind === undefined) await buildKernel();
  else {
    const modules = {};
    for (const pitch of PITCHES) modules[pitch] = Buffer.from(await compile(kind, pitch)).toString('base64');
    process.stdout.write(JSON.stringify(modules));
  }
}
