import { setTimeout as sleep } from 'node:timers/promises';
import { serveJob } from '../../worker/src/serve-job';

// The worker itself, resting between slices of steps, so that a run of a second's work lasts long enough to be disturbed.
const pauseMs = Number(process.env['TEST_PAUSE_MS'] ?? 0);
serveJob({ pause: () => (pauseMs > 0 ? sleep(pauseMs) : Promise.resolve()) });
