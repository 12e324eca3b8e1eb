import { setImmediate as breathe } from 'node:timers/promises';
import type { RunFailure } from '@halfdeep/contracts';
import {
  type Caution,
  CORE_VERSION,
  type FailureReport,
  type Fingerprint,
  type Integration,
  IntegrationFailure,
  recordSteps,
  setupSha256,
  snapSection,
} from '@halfdeep/ocean';
import { describeFailure, replayFailure } from '../replay';
import { Speedometer } from '../speedometer';
import type { ProgressLine } from './progress-line';
import type { RunNetcdf } from './run-netcdf';
import { type ColumnSummary, SeriesSummary } from './series-summary';

/** Signals are heard, and the bar is redrawn, about this often. */
const SLICE_MS = 25;
/** A checkpoint is kept in memory so often: a failure is replayed from there. */
const CHECKPOINT_MS = 20_000;

/** What `--json` prints of a finished integration. */
export interface IntegrationSummary {
  fingerprint: Fingerprint;
  coreVersion: string;
  setupSha256: string;
  /** Steps made, and model days. */
  steps: number;
  days: number;
  /** Wall clock, from the first step to the last. */
  seconds: number;
  cellStepsPerSecond: number;
  grid: { nx: number; ny: number; wetCells: number };
  /** Times at which a nonlinear run came near the limit of its step. */
  cautions: Caution[];
  budgets: Record<string, ColumnSummary>;
  sections: {
    name: string;
    along: 'latitude' | 'longitude';
    atDeg: number;
    /** By quantity: transport, heat, … */
    columns: Record<string, ColumnSummary>;
  }[];
}

export type IntegrationOutcome =
  | { kind: 'finished'; summary: IntegrationSummary }
  | { kind: 'failed'; failure: RunFailure; report: FailureReport }
  | { kind: 'stopped' };

export interface IntegrateOptions {
  /** At its first step. */
  run: Integration;
  /** The same again, for the replay of a failure that comes before the first checkpoint. */
  anew: () => Integration;
  restore: (checkpoint: Uint8Array) => Integration;
  file: RunNetcdf;
  progress: ProgressLine;
  stopped: () => boolean;
}

/** Steps a run to its end and writes every record as it falls due, at the steps at which the product writes them. */
export async function integrate(options: IntegrateOptions): Promise<IntegrationOutcome> {
  const { run, file, progress, stopped } = options;
  const budgets = new SeriesSummary(run.budgetColumns());
  const sections = new SeriesSummary(run.sectionColumns());
  const speed = new Speedometer();
  const began = performance.now();
  let checkpoint: { bytes: Uint8Array; at: number } = { bytes: new Uint8Array(0), at: began };
  const every = recordSteps(run.setup);
  const deliver = () => {
    const done = run.step - run.startStep;
    if (done % every.frames === 0) file.addFrame(run.frame());
    if (done % every.sections === 0) {
      const values = run.takeSections();
      sections.add(values);
      file.addRecord('sections', values);
    }
    if (done % every.moorings === 0) file.addRecord('moorings', run.takeMoorings());
    if (done % every.budget === 0) {
      const values = run.takeBudget();
      budgets.add(values);
      file.addRecord('budget', values);
    }
  };
  file.addFrame(run.frame());
  speed.mark(run.step, began);
  let stepMs = 0;
  try {
    while (run.step < run.totalSteps) {
      const sliceBegan = performance.now();
      do {
        const untilRecord = Object.values(every).map((steps) => steps - ((run.step - run.startStep) % steps));
        const affordable = stepMs > 0 ? Math.max(1, Math.floor(SLICE_MS / stepMs)) : 1;
        const steps = Math.min(run.totalSteps - run.step, affordable, ...untilRecord);
        const before = performance.now();
        run.advance(steps);
        const took = (performance.now() - before) / steps;
        stepMs = stepMs === 0 ? took : 0.8 * stepMs + 0.2 * took;
        deliver();
      } while (performance.now() - sliceBegan < SLICE_MS && run.step < run.totalSteps);
      const now = performance.now();
      speed.mark(run.step, now);
      show(progress, run, speed.stepsPerSecond());
      if (now - checkpoint.at >= CHECKPOINT_MS) checkpoint = { bytes: run.checkpoint(), at: now };
      await breathe();
      if (stopped()) return { kind: 'stopped' };
    }
  } catch (error) {
    if (!(error instanceof IntegrationFailure)) throw error;
    const replay = checkpoint.bytes.length > 0 ? options.restore(checkpoint.bytes) : options.anew();
    const report = await replayFailure(replay, stopped);
    if (!report) return { kind: 'stopped' };
    return { kind: 'failed', failure: describeFailure(report.cause, report.message, report), report };
  } finally {
    progress.end();
  }
  const seconds = (performance.now() - began) / 1000;
  const fingerprint = run.fingerprint();
  file.finish(fingerprint);
  return { kind: 'finished', summary: summaryOf(run, fingerprint, seconds, budgets, sections) };
}

function show(progress: ProgressLine, run: Integration, stepsPerSecond: number | null): void {
  const { step, startStep, totalSteps, grid, setup } = run;
  progress.show({
    share: (step - startStep) / (totalSteps - startStep),
    day: step / setup.numerics.stepsPerDay,
    totalDays: totalSteps / setup.numerics.stepsPerDay,
    secondsLeft: stepsPerSecond ? (totalSteps - step) / stepsPerSecond : null,
    cellStepsPerSecond: stepsPerSecond ? stepsPerSecond * grid.nx * grid.ny : null,
  });
}

function summaryOf(
  run: Integration,
  fingerprint: Fingerprint,
  seconds: number,
  budgets: SeriesSummary,
  sections: SeriesSummary,
): IntegrationSummary {
  const { setup, grid } = run;
  const steps = run.step - run.startStep;
  const columns = Object.entries(sections.get());
  return {
    fingerprint,
    coreVersion: CORE_VERSION,
    setupSha256: setupSha256(setup),
    steps,
    days: steps / setup.numerics.stepsPerDay,
    seconds,
    cellStepsPerSecond: (steps * grid.nx * grid.ny) / seconds,
    grid: { nx: grid.nx, ny: grid.ny, wetCells: grid.wetCells },
    cautions: run.cautions(),
    budgets: budgets.get(),
    sections: setup.output.sections.map((section, k) => ({
      name: section.name,
      along: section.along,
      atDeg: snapSection(grid, section).atDeg,
      columns: Object.fromEntries(
        columns
          .filter(([name]) => name.startsWith(`${k}.`))
          .map(([name, column]) => [name.slice(name.indexOf('.') + 1), column]),
      ),
    })),
  };
}
