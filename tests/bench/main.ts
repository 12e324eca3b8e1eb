/**
 * `npm run bench`: cell-steps a second of every stepper on four grids beside a C and a NumPy reference of the same
 * scheme, STREAM's bandwidth, checkpoints, and the share of a run's CPU time that goes into delivering results.
 * With `-- --json` the last line is one JSON object.
 */
import { cell } from './cpu';
import { benchDelivery } from './delivery';
import { compileReference, numpyCommand, streamBandwidth } from './native';
import { benchCheckpoints, benchGrid, GRIDS, STEPPERS, type Equations, type StepperRow } from './stepper';

const json = process.argv.includes('--json');
const print = (line: string) => process.stdout.write(`${line}\n`);
const ratio = (value: number | null, width = 10) => cell(value === null ? '–' : value.toFixed(2), width);

/** Doubles in an array of the triad: three of them are 384 MB, beyond any cache of a core. */
const TRIAD_DOUBLES = 16_000_000;

function printMode(equations: Equations, rows: StepperRow[]): void {
  print(`\n${equations === 'linear' ? 'Linear' : 'Nonlinear'} equations`);
  print(
    `${cell('grid', 11)}${['SIMD', 'TypeScript', 'C native', 'C SSE2', 'NumPy out', 'NumPy'].map((t) => cell(t, 12)).join('')}`,
  );
  for (const row of rows)
    print(`${cell(row.grid, 11)}${STEPPERS.map((name) => cell(row.speeds[name] ?? '–', 12)).join('')}`);
  const heads = ['kernel', '/C native', '/C SSE2', '/NumPy out', '/NumPy', '/TypeScript', 'TS/C native', '2 threads'];
  print(`${cell('ratios', 11)}${heads.map((t) => cell(t, 12)).join('')}`);
  for (const row of rows) {
    const { vsNativeC, vsSse2C, vsNumPy, vsNumPyPlain, vsReference, referenceVsNativeC, threads2 } = row;
    const ratios = [vsNativeC, vsSse2C, vsNumPy, vsNumPyPlain, vsReference, referenceVsNativeC, threads2];
    print(`${cell(row.grid, 11)}${cell(row.kernel, 12)}${ratios.map((value) => ratio(value, 12)).join('')}`);
  }
  print(
    `${cell('a run', 11)}${['Mcs/s', 'factor', 'bytes/cell', 'moved', 'of STREAM'].map((t) => cell(t, 12)).join('')}`,
  );
  for (const row of rows)
    print(
      `${cell(row.grid, 11)}${cell(row.recording, 12)}${ratio(row.factor, 12)}${cell(row.bytesPerCell, 12)}` +
        `${cell(row.movedPerCellStep, 12)}${ratio(row.streamFraction, 12)}`,
    );
  print(
    `Cost of a cell-step grows by ${growth(rows).toFixed(2)} from ${rows[0].grid} to ${rows[rows.length - 1].grid}.`,
  );
}

function growth(rows: StepperRow[]): number {
  return rows[0].mcs / rows[rows.length - 1].mcs;
}

const programs = await compileReference();
try {
  print(
    'Millions of cell-steps a second of one core, best of 5 chunks that take turns (CPU time; two threads: wall time).',
  );
  print(programs ? `C reference: ${programs.compiler}.` : 'No gcc here: the C reference and STREAM are left out.');
  if (!numpyCommand('out')) print('No Python with NumPy here: the NumPy reference is left out.');
  const bandwidth = programs ? streamBandwidth(programs, TRIAD_DOUBLES) : null;
  if (bandwidth !== null) print(`STREAM triad: ${(bandwidth / 1e9).toFixed(1)} GB/s on one core.`);
  const modes: Partial<Record<Equations, StepperRow[]>> = {};
  for (const equations of ['linear', 'nonlinear'] as const) {
    const rows: StepperRow[] = (modes[equations] = []);
    for (const grid of GRIDS) {
      process.stderr.write(`Measuring the ${equations} steppers on ${grid.join(' × ')} cells …\n`);
      rows.push(await benchGrid(equations, grid, programs, bandwidth));
    }
    printMode(equations, rows);
  }
  print('\nAll steppers left the same bits as the reference on every grid before they were timed.');
  print('a run: budget terms and sections added up every step, the state checked every 20.');
  print(
    'moved: bytes of state and stress a step reads and writes for a cell when it finds nothing in cache; where the',
  );
  print('fraction of STREAM exceeds what a step can reach, several steps were made while the rows were in cache.');

  print('\nCheckpoints (CPU seconds, best of 3)');
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
    const byGrid = (rows: StepperRow[] = []) => Object.fromEntries(rows.map(({ grid, ...row }) => [grid, row]));
    print(
      JSON.stringify({
        node: process.versions.node,
        compiler: programs?.compiler ?? null,
        streamBytesPerSecond: bandwidth,
        linear: byGrid(modes.linear),
        nonlinear: byGrid(modes.nonlinear),
        growth: { linear: growth(modes.linear!), nonlinear: growth(modes.nonlinear!) },
        checkpoints,
        delivery,
      }),
    );
  }
} finally {
  await programs?.remove();
}
