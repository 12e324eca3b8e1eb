import { serveJob } from '../../worker/src/serve-job';

// The worker itself, whose process is killed in its first slice of steps, every time.
serveJob({
  pause: () => {
    process.kill(process.pid, 'SIGKILL');
    return Promise.resolve();
  },
});
