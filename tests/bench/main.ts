/**
 * `npm run bench`: cell-steps a second of the stepper, checkpoints, and the share of a run's CPU time that goes into
 * delivering results. With `-- --json` the last line is one JSON object.
 */
import { cell } from './cpu';
import { benchDelivery } from './delivery';
import { benchCheckpoints, benchStepper } from './stepper';

const json = process.argv.includes('--json');
const print = (line: string) => process.stdout.write(`${line}\n`);

print('Stepper, millions of cell-steps a second of one core (CPU time, best of 5 interleaved chunks)');
print(`${cell('grid', 14)}${cell('plain', 10)}${cell('recording', 12)}${cell('factor', 10)}`);
const stepper = await benchStepper();
for (const row of stepper)
  print(`${cell(row.grid, 14)}${cell(row.plain, 10)}${cell(row.recording, 12)}${cell(row.factor, 10)}`);
print('recording: budget terms and sections added up every step, the state checked every 20.\n');

print('Checkpoints (CPU seconds, best of 3)');
print(`${cell('grid', 14)}${cell('MB', 10)}${cell('make', 12)}${cell('restore', 10)}`);
const checkpoints = await benchCheckpoints();
for (const row of checkpoints)
  print(`${cell(row.grid, 14)}${cell(row.megabytes, 10)}${cell(row.makeSeconds, 12)}${cell(row.restoreSeconds, 10)}`);

const delivery = await benchDelivery();
print(`\nDelivering results: Corvane setup, ${delivery.days} days, ${delivery.frames} frames, into a run file`);
print(
  `${cell(delivery.stepSeconds, 10)} s stepping, ${cell(delivery.recordSeconds, 6)} s records, ` +
    `${cell(delivery.checkpointSeconds, 6)} s checkpoints: ${(100 * delivery.share).toFixed(1)} % of the CPU time`,
);
if (json) {
  const { node } = process.versions;
  print(JSON.stringify({ node, stepper, checkpoints, delivery }));
}
