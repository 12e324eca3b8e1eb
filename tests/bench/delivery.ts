import { mkdtemp, mkdir, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { Integration, recordSteps } from '@halfdeep/ocean';
import { RunFileWriter, runPaths } from '@halfdeep/store';
import { corvaneForCheck } from '../../libs/ocean/src/testing/setups';
import { metaOf } from '../../worker/src/run-meta';
import { timed } from './cpu';

/** CPU seconds of a run: stepping, handing records to the run file, and checkpoints; and the share that is not stepping. */
export interface DeliveryShare {
  days: number;
  frames: number;
  stepSeconds: number;
  recordSeconds: number;
  checkpointSeconds: number;
  /** (records + checkpoints) / all. */
  share: number;
}

/** Steps between commits and between checkpoints, as a worker makes them at about 1000 steps a second. */
const COMMIT_STEPS = 1000;
const CHECKPOINT_STEPS = 20_000;

/** Half a year of the Corvane setup into a real run file in a folder of its own, which is removed. */
export async function benchDelivery(): Promise<DeliveryShare> {
  const setup = corvaneForCheck();
  setup.output = {
    sections: [
      { name: 'N 10', along: 'latitude', atDeg: 10 },
      { name: 'Equator', along: 'latitude', atDeg: 0 },
      { name: 'Meridian 30', along: 'longitude', atDeg: 30 },
    ],
    moorings: [{ name: 'East', longitudeDeg: 55, latitudeDeg: 0 }],
    frameIntervalDays: 5,
    sectionIntervalDays: 1,
    mooringIntervalDays: 0.25,
    momentumBudget: false,
    vorticityBudget: false,
  };
  setup.length = { days: 180 };
  const folder = await mkdtemp(join(tmpdir(), 'halfdeep-bench-'));
  const spent = { stepSeconds: 0, recordSeconds: 0, checkpointSeconds: 0 };
  let frames = 1;
  try {
    await mkdir(join(folder, 'runs'));
    const run = Integration.start(setup);
    const intervals = recordSteps(setup);
    const writer = await RunFileWriter.open(runPaths(folder, 'bench'), metaOf('bench', run));
    try {
      writer.addFrame(run.frame());
      const slice = Math.min(...Object.values(intervals));
      while (run.step < run.totalSteps) {
        spent.stepSeconds += await timed(() => run.advance(slice));
        spent.recordSeconds += await timed(async () => {
          if (run.step % intervals.frames === 0) {
            writer.addFrame(run.frame());
            frames += 1;
          }
          if (run.step % intervals.sections === 0) writer.addRecord('sections', run.takeSections());
          if (run.step % intervals.moorings === 0) writer.addRecord('moorings', run.takeMoorings());
          if (run.step % intervals.budget === 0) writer.addRecord('budget', run.takeBudget());
          if (run.step % COMMIT_STEPS === 0 || run.step === run.totalSteps) await writer.commit();
        });
        if (run.step % CHECKPOINT_STEPS === 0 || run.step === run.totalSteps)
          spent.checkpointSeconds += await timed(() => writer.saveCheckpoint(run.step, run.checkpoint()));
      }
    } finally {
      await writer.close();
    }
  } finally {
    await rm(folder, { recursive: true, force: true });
  }
  const delivering = spent.recordSeconds + spent.checkpointSeconds;
  return { days: setup.length.days, frames, ...spent, share: delivering / (delivering + spent.stepSeconds) };
}
