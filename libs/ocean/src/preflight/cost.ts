import type { Cost, PreflightContext } from '../preflight-types';
import type { Setup } from '../setup';
import type { GridLayout } from '../grid/build-grid';

/** Cell-steps a second of one core, assumed when the machine's own speed is not known. */
export const ASSUMED_CELL_STEPS_PER_SECOND = 30e6;
/**
 * Work of a nonlinear step over that of a linear one, and what each budget of every term adds: of the kernels' own
 * operation counts until a machine's bench says better.
 */
const NONLINEAR_WORK = 1.6;
const MOMENTUM_WORK = 0.4;
const VORTICITY_WORK = 0.4;
/** Keys, page headers and the write-ahead log of a run file, over its data. */
const FILE_OVERHEAD = 1.05;
const MOORING_COLUMNS = 3;
const SECTION_COLUMNS = 3;
/** At most, of a budget of momentum or vorticity. */
const TERM_COLUMNS = 14;

/**
 * Work and disk of a run. Disk: frames of η, u, v in float32 on their own points, the series in float64, and the last
 * two checkpoints of nine float64 arrays each. Water cells are counted once, for the answer: a remedy that is tried needs none.
 */
export function costOf(setup: Setup, layout: GridLayout, context: PreflightContext): Omit<Cost, 'wetCells'> {
  const { nx, ny } = layout;
  const { output } = setup;
  const cells = nx * ny;
  const steps = Math.round(setup.length.days * setup.numerics.stepsPerDay);
  const records = (intervalDays: number) => Math.floor(setup.length.days / intervalDays + 1e-9);
  // The initial state is a frame of its own.
  const frames = records(output.frameIntervalDays) + 1;
  const points = cells + (nx + 1) * ny + nx * (ny + 1);
  const sectionColumns = output.sections.length * SECTION_COLUMNS + latitudes(output) * (1 + sourcesOf(setup));
  const seriesValues =
    records(output.sectionIntervalDays) * (sectionColumns + budgetColumns(setup)) +
    records(output.mooringIntervalDays) * MOORING_COLUMNS * output.moorings.length;
  const checkpoints = 2 * 3 * points * 8;
  const cellStepsPerSecond = context.cellStepsPerSecond ?? ASSUMED_CELL_STEPS_PER_SECOND;
  return {
    cells,
    steps,
    seconds: (cells * steps * workOf(setup)) / cellStepsPerSecond,
    diskBytes: Math.ceil(FILE_OVERHEAD * (frames * points * 4 + seriesValues * 8) + checkpoints),
    frames,
    cellStepsPerSecond,
  };
}

/** Work of a cell-step over that of a plain linear one. */
function workOf({ numerics, output }: Setup): number {
  const equations = numerics.equations === 'nonlinear' ? NONLINEAR_WORK : 1;
  const budgets = (output.momentumBudget ? MOMENTUM_WORK : 0) + (output.vorticityBudget ? VORTICITY_WORK : 0);
  return equations + budgets;
}

function latitudes({ sections }: Setup['output']): number {
  return sections.filter(({ along }) => along === 'latitude').length;
}

/** What adds mass besides the transports: damping of the interface, sponges among it, and entrainment. */
function sourcesOf({ layer, basin, numerics }: Setup): number {
  const damped = layer.dampingPerS > 0 || basin.sponges.length > 0;
  const entrained = numerics.equations === 'nonlinear' && layer.entrainment !== null;
  return (damped ? 1 : 0) + (entrained ? 1 : 0);
}

/** Columns of the budget stream: mass and energy with the terms that a setup has, then the budgets asked for. */
function budgetColumns({ basin, layer, numerics, output }: Setup): number {
  const nonlinear = numerics.equations === 'nonlinear';
  const entrainment = nonlinear ? layer.entrainment : null;
  return (
    13 +
    (basin.sponges.length > 0 ? 2 : 0) +
    (entrainment ? 2 : 0) +
    (entrainment?.detrainment === 'uniform' ? 2 : 0) +
    (nonlinear ? 2 : 0) +
    (output.momentumBudget ? TERM_COLUMNS : 0) +
    (output.vorticityBudget ? TERM_COLUMNS : 0)
  );
}
