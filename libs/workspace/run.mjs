import { spawn } from 'node:child_process';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';

/** Root folder of the repository. */
export const root = join(dirname(fileURLToPath(import.meta.url)), '..', '..');

/** Runs a command with the terminal's own output; ends this process with its exit code when it fails. */
export async function run(command, args, options = {}) {
  const code = await exitCode(command, args, options);
  if (code !== 0) {
    console.error(`\n${command} ${args.join(' ')} ended with exit code ${code}.`);
    process.exit(code);
  }
}

/** Runs a command and answers its exit code. */
export function exitCode(command, args, options = {}) {
  return new Promise((resolve, reject) => {
    const child = spawn(command, args, { cwd: root, stdio: 'inherit', ...options });
    child.on('error', reject);
    child.on('exit', (code, signal) => resolve(code ?? (signal ? 1 : 0)));
  });
}
