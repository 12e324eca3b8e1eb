// Installs the packages when they are missing or older than the lock file, and nothing from anywhere but the registry:
// sqlite3 is compiled here instead of being fetched as a finished binary.
import { createHash } from 'node:crypto';
import { existsSync, readFileSync, statSync, writeFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { spawnSync } from 'node:child_process';
import { exitCode, root } from './run.mjs';

const stampFile = join(root, 'node_modules', '.halfdeep-install');
const binding = join(root, 'node_modules', 'sqlite3', 'build', 'Release', 'node_sqlite3.node');

/** Changes whenever what is installed would: the lock file, the manifests and the Node.js that sqlite3 was built for. */
function wanted() {
  const hash = createHash('sha256').update(process.versions.modules).update(process.arch);
  hash.update(readFileSync(join(root, 'package-lock.json')));
  return hash.digest('hex');
}

/** True when the packages were put there (npm ci) after the lock file was written. */
function packagesThere() {
  const hidden = join(root, 'node_modules', '.package-lock.json');
  return existsSync(hidden) && statSync(hidden).mtimeMs >= statSync(join(root, 'package-lock.json')).mtimeMs;
}

/** True when that was done by hand, and sqlite3 loads. */
function installedByHand() {
  if (!packagesThere() || !existsSync(binding)) return false;
  return spawnSync(process.execPath, ['-e', 'require("sqlite3")'], { cwd: root }).status === 0;
}

function stop(message) {
  console.error(`\n${message}\n`);
  process.exit(1);
}

/** What compiling sqlite3 needs; stops with one sentence on what is missing and what would bring it. */
function checkCompiler() {
  const missing = [];
  const works = (command, args) => spawnSync(command, args, { stdio: 'ignore' }).status === 0;
  if (!works('python3', ['--version'])) missing.push('python3');
  if (!works('make', ['--version'])) missing.push('make');
  if (!works('g++', ['--version'])) missing.push('g++');
  if (missing.length > 0)
    stop(
      `The database driver is compiled here, and that needs ${missing.join(', ')}. ` +
        `On Debian: apt-get install ${missing.join(' ')}. Then start again.`,
    );
  const prefix = dirname(dirname(process.execPath));
  const headers = existsSync(join(prefix, 'include', 'node', 'node.h'));
  if (!headers && !process.env.npm_config_nodedir)
    stop(
      `The database driver is compiled here, and that needs the headers of Node.js ${process.versions.node}, which are not ` +
        `at ${join(prefix, 'include', 'node')}. Install Node.js from its full archive, or set npm_config_nodedir to a folder ` +
        'that holds include/node. Then start again.',
    );
  return headers ? { npm_config_nodedir: prefix } : {};
}

// NODE_ENV=production would leave the build tools out.
const quiet = ['--no-audit', '--no-fund', '--no-progress', '--loglevel=error'];
async function installPackages(env) {
  if ((await exitCode('npm', ['ci', '--ignore-scripts', '--include=dev', ...quiet], { env })) !== 0)
    stop('The packages could not be installed; the message above says why.');
}

/** `database: false`: the packages alone, for what needs no database; sqlite3 is not compiled then. */
export async function install({ database = true } = {}) {
  const [major, minor] = process.versions.node.split('.').map(Number);
  if (major < 20 || (major === 20 && minor < 19))
    stop(`Halfdeep needs Node.js 20.19 or newer; this is ${process.versions.node}.`);
  const stamp = wanted();
  if (existsSync(stampFile) && readFileSync(stampFile, 'utf8') === stamp && existsSync(binding)) return;
  if (!database) {
    if (!packagesThere()) {
      console.log('Installing the packages …');
      await installPackages(process.env);
    }
    return;
  }
  if (!installedByHand()) {
    console.log('Installing the packages; the database driver is compiled, which takes a minute or two …');
    const env = { ...process.env, ...checkCompiler(), CFLAGS: '-O1', CXXFLAGS: '-O1' };
    await installPackages(env);
    env.npm_config_build_from_source = 'sqlite3';
    if ((await exitCode('npm', ['rebuild', 'sqlite3', ...quiet], { env })) !== 0 || !existsSync(binding))
      stop('The database driver could not be compiled; the message above says why.');
  }
  writeFileSync(stampFile, stamp);
}
