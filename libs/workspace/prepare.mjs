// Runs before `npm start` and `npm test`: installs, finds a browser for the tests, builds what is stale.
import { install } from './install.mjs';

const purpose = process.argv[2];
await install();
if (purpose === 'test') (await import('./chromium.mjs')).ensureChromium();
await (await import('./build.mjs')).buildStale();
