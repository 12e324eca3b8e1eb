// Runs before `npm start` and `npm test`: installs, finds a browser for the tests, builds what is stale. Before
// `npm run integrate` it installs the packages alone: that needs neither database nor client.
import { install } from './install.mjs';

const purpose = process.argv[2];
const headless = purpose === 'integrate';
await install({ database: !headless });
if (purpose === 'test') (await import('./chromium.mjs')).ensureChromium();
if (!headless) await (await import('./build.mjs')).buildStale();
