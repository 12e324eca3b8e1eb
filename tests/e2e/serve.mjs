// Starts the built product on a database of its own and removes that when it has ended.
import { spawn } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';

const folder = mkdtempSync(join(tmpdir(), 'halfdeep-e2e-'));
const server = spawn(process.execPath, ['--enable-source-maps', 'dist/api/main.js'], {
  stdio: 'inherit',
  env: { ...process.env, HALFDEEP_VAR: folder },
});
for (const signal of ['SIGTERM', 'SIGINT']) process.on(signal, () => server.kill(signal));
server.on('exit', (code) => {
  rmSync(folder, { recursive: true, force: true });
  process.exit(code ?? 1);
});
