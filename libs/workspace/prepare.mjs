// Runs before `npm start` and `npm test`: installs, finds a browser for the tests, builds what is stale. Before
// `npm run integrate`, `bench` and `verify` it installs the packages and compiles the stepper (the command is bundled
// too): these need neither database nor client.
import { install } from './install.mjs';

const purpose = process.argv[2];
const headless = ['integrate', 'bench', 'verify'].includes(purpose);
await install({ database: !headless });
if (purpose === 'test') (await import('./chromium.mjs')).ensureChromium();
if (purpose === 'integrate') await (await import('./build.mjs')).buildIntegrate();
else if (headless) await (await import('./build-kernel.mjs')).buildKernel();
else await (await import('./build.mjs')).buildStale();
