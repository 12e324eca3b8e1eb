import { readableLatitude, readableLongitude } from '../describe/numbers';
import { buildGrid, gridLayout, type GridLayout } from '../grid/build-grid';
import type { Grid } from '../grid/grid';
import { coastLongitude } from '../grid/land';
import { snapMooring } from '../integration/moorings';
import { proposeStepsPerDay } from '../preflight/step-limits';
import type { Basin, Section, Setup } from '../setup';

/** 'same': the land cells of the parent, divided or gathered; 'anew': the coast is rasterised on the new grid. */
export type CoastChoice = 'same' | 'anew';

/** A section of the refined setup beside that of its parent. */
export interface RefinedSection {
  /** Where the line lies in the parent and in the refined run, degrees. */
  fromDeg: number;
  toDeg: number;
  /** The grid has no line there: the two transports are not those of one line. */
  moved: boolean;
}

export interface Refinement {
  setup: Setup;
  /** In the order of the setup's sections. */
  sections: RefinedSection[];
  /** What had to move or was left out, in sentences. */
  notes: string[];
}

/** A step that is a multiple of 4 a day: numerics.md §12. */
const STEPS_MULTIPLE = 4;
const HAIR = 1e-9;

/**
 * The same setup at `factor` times the resolution: half the spacing (2) or twice the spacing (0.5), between the very
 * edges of the parent's snapped grid, so that rows and columns of the coarser grid are every second one of the finer.
 * Steps a day: those proposed for the new grid, and at least `factor` times the parent's. Physics, wind and output
 * intervals stay.
 *
 * RangeError, in one sentence, when a number of cells cannot be halved, the run starts from the last state of another
 * one, or the new grid is beyond a limit.
 */
export function refinedSetup(setup: Setup, factor: 2 | 0.5, coast: CoastChoice): Refinement {
  if (setup.start.kind === 'state')
    throw new RangeError(
      'This run starts from the last state of another one, which exists on its own grid alone: refine a run that starts from rest or from an analytic state.',
    );
  const from = gridLayout(setup);
  if (factor === 0.5) refuseOdd(from);
  const refined = withSteps(onRefinedGrid(setup, from, factor, coast), setup, factor);
  const to = gridLayout(refined);
  const sections = setup.output.sections.map((section) => refinedSection(section, from, to));
  refined.output = {
    ...refined.output,
    sections: refined.output.sections.map((section, k) => onItsLine(section, sections[k], to)),
  };
  const notes = setup.output.sections.flatMap((section, k) =>
    sections[k].moved
      ? [
          `The section “${section.name}” moves from ${degrees(sections[k].fromDeg)} to ${degrees(sections[k].toDeg)}: this grid has no line where the run keeps it.`,
        ]
      : [],
  );
  if (setup.output.moorings.length > 0) {
    const kept = keptMoorings(setup, refined);
    refined.output = { ...refined.output, moorings: kept.moorings };
    notes.push(...kept.notes);
  }
  return { setup: refined, sections, notes };
}

/** Whether the coast can be rasterised in two ways: there is land. */
export function hasLand({ westernCoast, islands }: Pick<Basin, 'westernCoast' | 'islands'>): boolean {
  return westernCoast.kind !== 'rectangular' || islands.length > 0;
}

function refuseOdd({ nx, ny, meridional }: GridLayout): void {
  if (nx % 2 === 1) throw new RangeError(`Half the resolution needs an even number of columns; this run has ${nx}.`);
  if (ny % 2 === 1) throw new RangeError(`Half the resolution needs an even number of rows; this run has ${ny}.`);
  const { equatorRow } = meridional;
  if (equatorRow !== null && equatorRow % 2 === 1)
    throw new RangeError(
      `Half the resolution needs an even number of rows on either side of the equator; this run has ${equatorRow} south of it and ${ny - equatorRow} north of it.`,
    );
}

/** The setup on the new spacing; edges that snapping moved in the parent are written out where they would move again. */
function onRefinedGrid(setup: Setup, from: GridLayout, factor: 2 | 0.5, coast: CoastChoice): Setup {
  const numerics = {
    ...setup.numerics,
    spacingLongitudeDeg: tidy(from.zonal.spacing / factor, setup.numerics.spacingLongitudeDeg / factor),
    spacingLatitudeDeg: tidy(from.meridional.spacing / factor, setup.numerics.spacingLatitudeDeg / factor),
  };
  const same = hasLand(setup.basin) && coast === 'same';
  const raster = setup.basin.coastSpacing ?? {
    longitudeDeg: tidy(from.zonal.spacing, setup.numerics.spacingLongitudeDeg),
    latitudeDeg: tidy(from.meridional.spacing, setup.numerics.spacingLatitudeDeg),
  };
  const basin: Basin = { ...setup.basin, coastSpacing: same ? raster : null };
  const fits = (candidate: Basin) => {
    const { zonal, meridional } = gridLayout({ basin: candidate, numerics });
    return (
      sameAxis(from.zonal, zonal, factor) &&
      sameAxis(from.meridional, meridional, factor) &&
      (from.meridional.equatorRow ?? 0) * factor === (meridional.equatorRow ?? 0)
    );
  };
  if (fits(basin)) return { ...setup, basin, numerics };
  const snapped = withEdges(basin, from);
  if (fits(snapped)) return { ...setup, basin: snapped, numerics };
  throw new RangeError('No grid at this resolution has the edges of this run.');
}

/** The basin with the edges that its grid has; a slanting coast stays on its line. */
function withEdges(basin: Basin, { zonal, meridional }: GridLayout): Basin {
  const southDeg = tidy(meridional.start, basin.southDeg);
  const northDeg = tidy(meridional.start + meridional.cells * meridional.spacing, basin.northDeg);
  const { westernCoast } = basin;
  return {
    ...basin,
    westDeg: tidy(zonal.start, basin.westDeg),
    eastDeg: tidy(zonal.start + zonal.cells * zonal.spacing, basin.eastDeg),
    southDeg,
    northDeg,
    westernCoast:
      westernCoast.kind === 'rectangular'
        ? westernCoast
        : {
            ...westernCoast,
            atSouthDeg: coastLongitude(basin, southDeg),
            atNorthDeg: coastLongitude(basin, northDeg),
          },
  };
}

type Axis = GridLayout['zonal'];
function sameAxis(from: Axis, to: Axis, factor: number): boolean {
  return to.cells === from.cells * factor && Math.abs(to.start - from.start) < HAIR * from.spacing * from.cells;
}

function withSteps(refined: Setup, parent: Setup, factor: number): Setup {
  const inProportion = STEPS_MULTIPLE * Math.ceil((factor * parent.numerics.stepsPerDay) / STEPS_MULTIPLE);
  const stepsPerDay = Math.max(proposeStepsPerDay(refined), inProportion);
  return { ...refined, numerics: { ...refined.numerics, stepsPerDay } };
}

const axisOf = (section: Section, layout: GridLayout): Axis =>
  section.along === 'latitude' ? layout.meridional : layout.zonal;
const sameLine = (a: number, b: number, axis: Axis) => Math.abs(a - b) < HAIR * axis.spacing * axis.cells;

/** The parent's own line where this grid has it, else the line nearest to what was asked. */
function refinedSection(section: Section, from: GridLayout, to: GridLayout): RefinedSection {
  const axis = axisOf(section, to);
  const fromDeg = nearestLine(axisOf(section, from), section.atDeg);
  const moved = !sameLine(nearestLine(axis, fromDeg), fromDeg, axis);
  return { fromDeg, toDeg: nearestLine(axis, moved ? section.atDeg : fromDeg), moved };
}

/** The section as it was typed, or at the parent's line where this grid would snap it to another one. */
function onItsLine(section: Section, { toDeg }: RefinedSection, to: GridLayout): Section {
  const axis = axisOf(section, to);
  return sameLine(nearestLine(axis, section.atDeg), toDeg, axis) ? section : { ...section, atDeg: toDeg };
}

/** Where `snapSection` puts a line. */
function nearestLine({ start, spacing, cells }: Axis, atDeg: number): number {
  const line = Math.min(cells, Math.max(0, Math.round((atDeg - start) / spacing)));
  return start + line * spacing;
}

function keptMoorings(setup: Setup, refined: Setup): { moorings: Setup['output']['moorings']; notes: string[] } {
  const [before, after] = [buildGrid(setup), buildGrid(refined)];
  const notes: string[] = [];
  const moved: string[] = [];
  const moorings = setup.output.moorings.filter((mooring) => {
    const here = placeOf(after, mooring);
    if (!here) {
      notes.push(`The mooring “${mooring.name}” would lie on land here and is left out.`);
      return false;
    }
    const there = placeOf(before, mooring);
    if (there && there !== here) moved.push(`“${mooring.name}” from ${there} to ${here}`);
    return true;
  });
  if (moved.length > 0)
    notes.push(`Moorings sit at the centres of cells, which are others on this grid: ${moved.join(', ')}.`);
  return { moorings, notes };
}

/** The cell that holds a mooring, in words; null outside the water. */
function placeOf(grid: Grid, mooring: Setup['output']['moorings'][number]): string | null {
  try {
    const { longitudeDeg, latitudeDeg } = snapMooring(grid, mooring);
    return `${readableLongitude(longitudeDeg)}, ${readableLatitude(latitudeDeg)}`;
  } catch (error) {
    if (error instanceof RangeError) return null;
    throw error;
  }
}

/** `value`, or `typed` where the two differ by no more than round-off. */
function tidy(value: number, typed: number): number {
  return Math.abs(value - typed) <= 1e-12 * Math.max(1, Math.abs(typed)) ? typed : value;
}

function degrees(value: number): string {
  return `${String(Number(value.toFixed(4)) || 0).replace('-', '−')}°`;
}
