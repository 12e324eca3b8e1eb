/* global setInterval */
// A worker without arithmetic, for specs of the queue alone: it speaks the protocol and acts out the script in its setup.
const progress = (step, savedStep) => ({
  step,
  totalSteps: 100,
  startStep: 0,
  day: step / 4,
  totalDays: 25,
  cellStepsPerSecond: 1e6,
  secondsLeft: 1,
  records: { frames: step, sections: 0, moorings: 0, budget: 0 },
  savedStep,
});
const tell = (message) => new Promise((resolve) => process.send(message, undefined, {}, resolve));
const report = (step, savedStep) =>
  tell({
    type: 'report',
    progress: progress(step, savedStep),
    residentBytes: process.memoryUsage.rss(),
    cpuSeconds: 1,
    diskBytes: 5,
  });
const end = async (outcome) => {
  await tell({ type: 'outcome', outcome });
  process.exit(0);
};
const finish = () =>
  end({
    kind: 'finished',
    fingerprint: { sha256: 'f'.repeat(64), coreVersion: '1', shape: [1, 1, 1, 1, 1, 1] },
    stateSha256: 'a'.repeat(64),
    lastStep: 100,
    progress: progress(100, 100),
    diskBytes: 7,
  });
const acts = {
  finish,
  work: () => setInterval(() => void report(10, null), 100),
  stubborn: () => setInterval(() => undefined, 1000),
  die: () => {
    process.stderr.write('out of paper\n');
    process.kill(process.pid, 'SIGKILL');
  },
  saveAndDie: async () => {
    await tell({ type: 'checkpoint', step: 20 });
    process.exit(3);
  },
  full: () => end({ kind: 'disk full', message: 'full' }),
  fail: () =>
    end({
      kind: 'failed',
      failure: { cause: 'non-finite', message: 'bad', step: 3, day: 1, place: null, lastGoodStep: 2 },
    }),
};
let script = '';
process.on('message', (order) => {
  if (order.type === 'save') {
    if (script === 'work') void end({ kind: 'saved', progress: progress(12, 12), diskBytes: 6 });
    return;
  }
  script = order.job.setup.script;
  void report(1, null).then(() => acts[script]());
});
process.on('disconnect', () => process.exit(0));
