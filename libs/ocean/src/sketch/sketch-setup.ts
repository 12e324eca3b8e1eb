import { readable } from '../describe/numbers';
import { DAYS_PER_YEAR } from '../forcing/season';
import { LIMITS } from '../limits';
import { LandRows } from '../preflight/land-rows';
import { preflight } from '../preflight/preflight';
import type { Preflight } from '../preflight-types';
import { roundedUp } from '../preflight/remedies';
import { scalesOf, type Scales } from '../preflight/scales';
import { proposeStepsPerDay } from '../preflight/step-limits';
import type { Setup } from '../setup';
import { sketchNotes } from './sketch-notes';

/** Work of a sketch, cell-steps: a few seconds of one core. A nonlinear step costs about half as much again. */
export const SKETCH_WORK = { linear: 1.6e8, nonlinear: 1.1e8 } as const;

/** A coarse version of a setup, and what it cannot show. */
export interface Sketch {
  /** Starts from rest or an analytic state, keeps no moorings and no budgets of its own. */
  setup: Setup;
  /** Its spacing over that of the setup, whole numbers. */
  coarser: { longitude: number; latitude: number };
  cellSteps: number;
  /** Preflight of the sketch: never refused. */
  preflight: Preflight;
  /** What was changed and what the coarse grid cannot show, in sentences. */
  notes: string[];
}

/** Fewer cells across an axis show nothing; an axis that has fewer keeps its own. */
const LEAST_CELLS = 12;
const MOST_COARSER = 64;
/** Rows of the space-time diagram, and the memory that its frames may take (η, u, v in float32). */
const MOST_ROWS = 400;
const MOST_FRAME_BYTES = 64e6;
const QUARTERS = 4;

/**
 * A coarse version of a setup that integrates in a few seconds: the spacing a whole multiple, as small as the work
 * allows with at least three cells to the trapping scale; then a shorter length, of one season where possible; then wider
 * cells. Viscosity is raised where the wall layer would be narrower than a cell, and the steps are proposed anew. The
 * coast is rasterised on the coarse grid.
 *
 * RangeError, in a sentence, when no coarse version passes preflight.
 */
export function sketchSetup(setup: Setup): Sketch {
  const given = scalesOf(setup);
  const plans = plansFor(setup, given);
  let refusal = '';
  for (const plan of plans) {
    const judged = preflight(plan.setup);
    if (judged.verdict !== 'refuse')
      return {
        ...plan,
        preflight: judged,
        notes: sketchNotes(setup, given, plan.setup, scalesOf(plan.setup), plan.coarser),
      };
    refusal ||= judged.checks[0]?.reason ?? '';
  }
  throw new RangeError(
    refusal
      ? `No sketch of this setup can be integrated. ${refusal}`
      : `No sketch of this setup can be made in ${readable(workOf(setup), 3)} cell-steps: even its coarsest grid is too fine for a day.`,
  );
}

interface Plan {
  setup: Setup;
  coarser: Sketch['coarser'];
  cellSteps: number;
}

/** In order of preference; each fits the work. */
function plansFor(setup: Setup, given: Scales): Plan[] {
  const work = workOf(setup);
  const asked = setup.length.days;
  const grids = coarseGrids(setup, given);
  const fine = grids.filter(({ scales }) => showsEquator(scales));
  const whole = (grid: CoarseGrid) => (fits(grid, asked, work) ? [planOf(grid, asked)] : []);
  const season = Math.min(asked, DAYS_PER_YEAR);
  const shortened = (grid: CoarseGrid) =>
    fits(grid, season, work) ? [planOf(grid, cutLength(grid, asked, work))] : [];
  const shortest = (grid: CoarseGrid) => {
    const days = cutLength(grid, asked, work);
    return days >= LIMITS.lengthDays.min ? [planOf(grid, days)] : [];
  };
  const wider = grids.filter((grid) => !fine.includes(grid));
  return [
    ...fine.flatMap(whole),
    ...fine.slice().reverse().flatMap(shortened),
    ...wider.flatMap(shortened),
    ...grids.slice().reverse().flatMap(shortest),
  ].filter((plan, k, all) => all.findIndex(({ setup: other }) => samePlan(other, plan.setup)) === k);
}

function samePlan(a: Setup, b: Setup): boolean {
  return (
    a.length.days === b.length.days &&
    a.numerics.spacingLongitudeDeg === b.numerics.spacingLongitudeDeg &&
    a.numerics.spacingLatitudeDeg === b.numerics.spacingLatitudeDeg
  );
}

const workOf = ({ numerics }: Setup) => SKETCH_WORK[numerics.equations];
const showsEquator = ({ holdsEquator, trapping, dx, dy }: Scales) =>
  !holdsEquator || trapping === null || Math.max(dx, dy) <= trapping / 3;

interface CoarseGrid {
  setup: Setup;
  coarser: Sketch['coarser'];
  scales: Scales;
  cells: number;
}

function fits({ cells, setup }: CoarseGrid, days: number, work: number): boolean {
  return cells * setup.numerics.stepsPerDay * days <= work;
}

/** Grids of 1, 2, 3, … times the spacing, while something is left of them. */
function coarseGrids(setup: Setup, given: Scales): CoarseGrid[] {
  const grids: CoarseGrid[] = [];
  for (let k = 1; k <= MOST_COARSER; k++) {
    const longitude = Math.max(1, Math.min(k, Math.floor(given.layout.nx / LEAST_CELLS)));
    const latitude = Math.max(1, Math.min(k, Math.floor(given.layout.ny / LEAST_CELLS)));
    if (k > 1 && longitude < k && latitude < k) break;
    const spacingLongitudeDeg = timesSpacing(setup.numerics.spacingLongitudeDeg, longitude);
    const spacingLatitudeDeg = timesSpacing(setup.numerics.spacingLatitudeDeg, latitude);
    if (Math.max(spacingLongitudeDeg, spacingLatitudeDeg) > LIMITS.spacing.max) break;
    const coarse = bareSetup(setup, { spacingLongitudeDeg, spacingLatitudeDeg });
    const viscous = k === 1 ? coarse : withWallLayer(coarse, scalesOf(coarse));
    // The setup's own step where its own grid is kept and the step is the shorter one.
    const proposed = proposeStepsPerDay(viscous);
    const stepsPerDay = k === 1 ? Math.max(proposed, setup.numerics.stepsPerDay) : proposed;
    if (stepsPerDay > LIMITS.stepsPerDay.max) continue;
    const stepped = { ...viscous, numerics: { ...viscous.numerics, stepsPerDay } };
    const scales = scalesOf(stepped);
    grids.push({
      setup: stepped,
      coarser: { longitude, latitude },
      scales,
      cells: scales.layout.nx * scales.layout.ny,
    });
  }
  return grids;
}

const timesSpacing = (degrees: number, times: number) => Number((degrees * times).toPrecision(12));

/** The setup on another spacing, from rest where it starts from a state, without what a sketch does not keep. */
function bareSetup(
  setup: Setup,
  spacing: Pick<Setup['numerics'], 'spacingLongitudeDeg' | 'spacingLatitudeDeg'>,
): Setup {
  return {
    ...setup,
    basin: { ...setup.basin, coastSpacing: null },
    start: setup.start.kind === 'state' ? { kind: 'rest' } : setup.start,
    numerics: { ...setup.numerics, ...spacing },
    output: { ...setup.output, moorings: [], momentumBudget: false, vorticityBudget: false },
  };
}

/**
 * Viscosity for a Munk layer (Munk 1950) as wide as a cell where both frictional layers of a wall would fall below what
 * preflight asks at least: one cell, or half a cell of a Stommel layer. Without any friction nothing is added.
 */
function withWallLayer(setup: Setup, { beta, munk, stommel, dx }: Scales): Setup {
  const hasWall = !setup.basin.zonallyPeriodic || setup.basin.islands.length > 0;
  if (!hasWall || munk === null || stommel === null || munk + stommel === 0) return setup;
  if (munk >= dx || stommel >= dx / 2) return setup;
  const viscosityM2S = Math.min(roundedUp(beta * dx ** 3), LIMITS.viscosity.max);
  return { ...setup, friction: { ...setup.friction, viscosityM2S } };
}

/** The longest length that fits the work: whole years, else whole days, else quarters of a day; 0 when none does. */
function cutLength({ cells, setup }: CoarseGrid, asked: number, work: number): number {
  const most = Math.min(asked, work / (cells * setup.numerics.stepsPerDay));
  if (most === asked) return asked;
  if (most >= DAYS_PER_YEAR) return DAYS_PER_YEAR * Math.floor(most / DAYS_PER_YEAR);
  return Math.floor(most);
}

function planOf({ setup, coarser, scales, cells }: CoarseGrid, days: number): Plan {
  const interval = rowInterval(days, cells);
  const land = new LandRows(setup.basin, scales.layout);
  const sections = setup.output.sections.filter(({ along, atDeg }) => {
    const line = land.lineOf(along, atDeg);
    return along === 'latitude' ? land.rowHasWater(line) : land.columnHasWater(line);
  });
  return {
    setup: {
      ...setup,
      length: { days },
      output: {
        ...setup.output,
        sections,
        frameIntervalDays: interval,
        sectionIntervalDays: interval,
        mooringIntervalDays: interval,
      },
    },
    coarser,
    cellSteps: cells * setup.numerics.stepsPerDay * days,
  };
}

/** Days between rows: whole quarters of a day that the length is a whole number of, where there are such. */
function rowInterval(days: number, cells: number): number {
  const quarters = Math.round(days * QUARTERS);
  const rows = Math.max(1, Math.min(MOST_ROWS, Math.floor(MOST_FRAME_BYTES / (12 * cells)) - 1));
  const least = Math.ceil(quarters / rows);
  for (let q = least; q <= Math.min(quarters, 4 * least); q++) if (quarters % q === 0) return q / QUARTERS;
  return least / QUARTERS;
}
