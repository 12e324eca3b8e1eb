// Finds a Chromium for the end-to-end tests, or gets Debian's.
import { existsSync } from 'node:fs';
import { spawnSync } from 'node:child_process';

const places = [
  '/usr/bin/chromium',
  '/usr/bin/chromium-browser',
  '/usr/bin/google-chrome',
  '/usr/bin/google-chrome-stable',
];

/** Path of a Chromium on this machine, or undefined. CHROMIUM_PATH names another one. */
export function findChromium() {
  return [process.env.CHROMIUM_PATH, ...places].find((path) => path && existsSync(path));
}

/** Makes sure that there is one: installs Debian's when the user may, else stops with the one command that does. */
export function ensureChromium() {
  if (findChromium()) return;
  const apt = existsSync('/usr/bin/apt-get');
  if (apt && process.getuid?.() === 0) {
    console.log('Installing Chromium from Debian for the end-to-end tests …');
    const env = { ...process.env, DEBIAN_FRONTEND: 'noninteractive' };
    const get = (args) => spawnSync('apt-get', args, { stdio: 'inherit', env }).status === 0;
    if (
      get(['update', '-qq']) &&
      get(['install', '-y', '-qq', '--no-install-recommends', 'chromium']) &&
      findChromium()
    )
      return;
  }
  console.error(
    apt
      ? '\nThe end-to-end tests need Chromium. Install it with: sudo apt-get install chromium\n'
      : '\nThe end-to-end tests need Chromium. Install it, or set CHROMIUM_PATH to one.\n',
  );
  process.exit(1);
}
