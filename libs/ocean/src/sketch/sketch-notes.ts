import { readable, readableLatitude, readableLongitude } from '../describe/numbers';
import { DAYS_PER_YEAR, SECONDS_PER_DAY } from '../forcing/season';
import { LandRows } from '../preflight/land-rows';
import type { Scales } from '../preflight/scales';
import type { Basin, Island, Section, Setup } from '../setup';

/** Islands of so few cells are named with their number. */
const FEW_CELLS = 4;

/** What was changed for a sketch and what its grid cannot show, in sentences, every number computed from the two setups. */
export function sketchNotes(
  setup: Setup,
  given: Scales,
  sketch: Setup,
  scales: Scales,
  coarser: { longitude: number; latitude: number },
): string[] {
  const own = coarser.longitude === 1 && coarser.latitude === 1;
  return [
    gridNote(given, scales, coarser, own),
    ...lengthNotes(setup, sketch),
    stepNote(setup, sketch, scales),
    ...startNotes(setup),
    ...(own ? [] : scales.layout.notes),
    ...equatorNotes(scales),
    ...coastalNotes(scales),
    ...wallNotes(setup, given, sketch, scales),
    ...islandNotes(setup.basin, given, sketch.basin, scales),
    ...sectionNotes(setup, given, sketch, scales),
    ...narrowNotes(setup, given, scales),
  ];
}

const km = (metres: number) => `${readable(metres / 1000)} km`;
const sizeOf = ({ dx, dy }: Scales) =>
  readable(dx / 1000) === readable(dy / 1000) ? km(dx) : `${readable(dx / 1000)} by ${km(dy)}`;
const shapeOf = ({ layout: { nx, ny } }: Scales) => `${readable(nx, 8)} × ${readable(ny, 8)}`;
const listed = (words: readonly string[]) =>
  words.length < 2 ? words.join('') : `${words.slice(0, -1).join(', ')} and ${words[words.length - 1]}`;

function gridNote(
  given: Scales,
  scales: Scales,
  { longitude, latitude }: { longitude: number; latitude: number },
  own: boolean,
): string {
  if (own)
    return `The setup is small enough to be sketched on its own grid of ${shapeOf(scales)} cells of ${sizeOf(scales)}.`;
  const times = longitude === latitude ? `${longitude} times` : `${longitude} by ${latitude} times`;
  return `${shapeOf(scales)} cells of ${sizeOf(scales)}, ${times} those of the setup (${shapeOf(given)} of ${sizeOf(given)}); the coast is drawn anew on them.`;
}

function lengthNotes(setup: Setup, sketch: Setup): string[] {
  const [from, to] = [setup.length.days, sketch.length.days];
  if (from === to) return [];
  const short = to < DAYS_PER_YEAR ? ', less than one season' : '';
  return [`Length cut from ${readable(from, 7)} to ${readable(to, 7)} d${short}: what comes later is not shown.`];
}

function stepNote(setup: Setup, sketch: Setup, { dt }: Scales): string {
  const [from, to] = [setup.numerics.stepsPerDay, sketch.numerics.stepsPerDay];
  const was = from === to ? '' : ` instead of ${readable(from, 6)}`;
  return `${readable(to, 6)} steps a day of ${readable(dt, 4)} s${was}.`;
}

function startNotes({ start }: Setup): string[] {
  if (start.kind !== 'state') return [];
  return [
    'It starts from rest: the state that the setup starts from exists on its own grid alone, and the season counts from day 0.',
  ];
}

function equatorNotes({ holdsEquator, trapping, dx, dy }: Scales): string[] {
  if (!holdsEquator || trapping === null) return [];
  const largest = Math.max(dx, dy);
  const cells = trapping / largest;
  const found = `${readable(cells, 2)} cells to the trapping scale of ${km(trapping)}`;
  if (cells >= 4) return [`${found}: equatorial waves are represented, Rossby waves a little too slow.`];
  return [`${found}, fewer than four: equatorial waves are too slow and too wide.`];
}

function coastalNotes({ fMax, c, dx, dy }: Scales): string[] {
  if (fMax === 0) return [];
  const ratio = (Math.max(dx, dy) * fMax) / c;
  if (ratio <= 1) return [];
  const found = `cells are ${readable(ratio, 2)} times c/|f| = ${km(c / fMax)} where that is smallest`;
  return [ratio > 2 ? `Coastal waves cannot be shown: ${found}.` : `Coastal waves are barely shown: ${found}.`];
}

function wallNotes(
  setup: Setup,
  given: Scales,
  sketch: Setup,
  { munk, stommel, dx, trapping, beta }: Scales,
): string[] {
  const hasWall = !setup.basin.zonallyPeriodic || setup.basin.islands.length > 0;
  if (!hasWall || munk === null || stommel === null || given.munk === null) return [];
  const [from, to] = [setup.friction.viscosityM2S, sketch.friction.viscosityM2S];
  if (from === to) {
    if (munk === 0 && stommel === 0)
      return ['Without viscosity and drag short Rossby waves pile up at the western wall, here at wider cells.'];
    const [name, width] = munk / 2 >= stommel ? ['Munk', munk] : ['Stommel', stommel];
    return [`The ${name} layer of ${km(width)} holds ${readable(width / dx, 2)} cells.`];
  }
  const fades = trapping === null ? 0 : (trapping * trapping) / to / SECONDS_PER_DAY;
  const cost = fades > 0 && beta > 0 ? `; over a trapping scale it damps in ${readable(fades, 2)} d` : '';
  const was = given.munk === 0 ? 'none' : `${km(given.munk)}`;
  return [
    `Viscosity raised from ${readable(from, 5)} to ${readable(to, 5)} m²/s, so that the Munk layer of the western wall is a cell wide, ${km(munk)} (${was} in the setup, ${readable(given.munk / dx, 2)} of these cells)${cost}.`,
  ];
}

function islandNotes(basin: Basin, given: Scales, coarse: Basin, scales: Scales): string[] {
  return basin.islands.flatMap((island, k) => {
    const was = landOf(basin, island, given);
    const left = landOf(coarse, island, scales);
    if (was === 0 || left > FEW_CELLS || left === was) return [];
    const name = island.name ? `The island “${island.name}”` : `Island ${k + 1}`;
    return [
      left === 0
        ? `${name} lies between the centres of the cells and is not there (${readable(was, 5)} cells in the setup).`
        : `${name} is ${left === 1 ? 'one cell' : `${left} cells`} (${readable(was, 5)} in the setup).`,
    ];
  });
}

/** Cells of one island alone. */
function landOf(basin: Basin, island: Island, { layout }: Scales): number {
  const alone: Basin = { ...basin, westernCoast: { kind: 'rectangular' }, islands: [island], coastSpacing: null };
  return layout.nx * layout.ny - new LandRows(alone, layout).wetCells();
}

function sectionNotes(setup: Setup, given: Scales, sketch: Setup, scales: Scales): string[] {
  const gone = setup.output.sections.filter((section) => !sketch.output.sections.includes(section));
  const moved = sketch.output.sections.flatMap((section) => {
    const [from, to] = [lineOf(section, given), lineOf(section, scales)];
    if (Math.abs(from - to) < 1e-9) return [];
    const words = section.along === 'latitude' ? readableLatitude : readableLongitude;
    return [`“${section.name}” at ${words(tidy(to))} instead of ${words(tidy(from))}`];
  });
  return [
    ...(gone.length > 0
      ? [
          `${listed(gone.map(({ name }) => `“${name}”`))}: no water on ${gone.length === 1 ? 'this line' : 'these lines'} of the coarse grid.`,
        ]
      : []),
    ...(moved.length > 0 ? [`Sections lie on the lines of the coarse grid: ${listed(moved)}.`] : []),
  ];
}

const tidy = (degrees: number) => Number(degrees.toFixed(4)) + 0;
function lineOf({ along, atDeg }: Section, { layout }: Scales): number {
  const axis = along === 'latitude' ? layout.meridional : layout.zonal;
  return axis.start + axis.spacing * Math.min(axis.cells, Math.max(0, Math.round((atDeg - axis.start) / axis.spacing)));
}

/** Winds, places of viscosity, sponges and starts that are narrower than a coarse cell, but not than one of the setup. */
function narrowNotes({ wind, friction, basin, start }: Setup, given: Scales, scales: Scales): string[] {
  const cell = ({ layout }: Scales) => ({ longitude: layout.zonal.spacing, latitude: layout.meridional.spacing });
  const [own, coarse] = [cell(given), cell(scales)];
  const narrow = (longitude: number | null, latitude: number | null) =>
    (longitude !== null && longitude < coarse.longitude && longitude >= own.longitude) ||
    (latitude !== null && latitude < coarse.latitude && latitude >= own.latitude);
  const found = [
    ...wind.components.flatMap(({ name, pattern }, k) => {
      const lost =
        pattern.kind === 'zonalBelt'
          ? narrow(null, pattern.widthDeg)
          : pattern.kind === 'gaussianPatch' && narrow(pattern.widthLongitudeDeg, pattern.widthLatitudeDeg);
      return lost ? [`the wind ${name ? `“${name}”` : `component ${k + 1}`}`] : [];
    }),
    ...friction.viscosityPatches.flatMap(({ name, widthLongitudeDeg, widthLatitudeDeg }, k) =>
      narrow(widthLongitudeDeg, widthLatitudeDeg) ? [`the viscosity ${name ? `“${name}”` : `place ${k + 1}`}`] : [],
    ),
    ...basin.sponges.flatMap(({ edge, widthDeg }) =>
      (edge === 'west' || edge === 'east' ? narrow(widthDeg, null) : narrow(null, widthDeg))
        ? [`the sponge in the ${edge}`]
        : [],
    ),
    ...(start.kind === 'bump' && narrow(start.widthLongitudeDeg, start.widthLatitudeDeg)
      ? ['the bump of the start']
      : []),
  ];
  return found.length > 0 ? [`Narrower than a cell of the sketch: ${listed(found)}.`] : [];
}
