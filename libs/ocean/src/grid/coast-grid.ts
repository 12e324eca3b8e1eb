import { LIMITS } from '../limits';
import type { Setup } from '../setup';
import { gridLayout, type GridLayout, type Snapped } from './grid-layout';
import { landMask } from './land';

/**
 * The grid on which coast and islands of a setup become land cells, where that is another than the run's own; else null.
 * May be of any size: `refuseCoastSize` and preflight bound it.
 */
export function coastLayout(setup: Pick<Setup, 'basin' | 'numerics'>): GridLayout | null {
  const { coastSpacing } = setup.basin;
  const { spacingLongitudeDeg, spacingLatitudeDeg } = setup.numerics;
  if (
    coastSpacing === null ||
    (coastSpacing.longitudeDeg === spacingLongitudeDeg && coastSpacing.latitudeDeg === spacingLatitudeDeg)
  )
    return null;
  return gridLayout({
    basin: setup.basin,
    numerics: {
      ...setup.numerics,
      spacingLongitudeDeg: coastSpacing.longitudeDeg,
      spacingLatitudeDeg: coastSpacing.latitudeDeg,
    },
  });
}

/**
 * For each cell of a run's axis the cells [first, end) of the coast's axis that decide about it: the one that holds its
 * centre where the coast is as coarse or coarser, those whose centres lie in it where the coast is finer.
 */
export function decidingCells(own: Snapped, coast: Snapped): { first: Int32Array; end: Int32Array } {
  const first = new Int32Array(own.cells);
  const end = new Int32Array(own.cells);
  const inside = (index: number) => Math.min(coast.cells - 1, Math.max(0, index));
  const finer = coast.spacing < 0.75 * own.spacing;
  const line = (i: number) => (own.start + i * own.spacing - coast.start) / coast.spacing;
  for (let i = 0; i < own.cells; i++) {
    const holder = inside(Math.floor(line(i + 0.5)));
    const from = finer ? Math.max(0, Math.ceil(line(i) - 0.5)) : holder;
    const to = finer ? Math.min(coast.cells, Math.ceil(line(i + 1) - 0.5)) : holder + 1;
    // A cell at an edge that snapping moved may hold no centre of the coast's grid.
    first[i] = to > from ? from : holder;
    end[i] = to > from ? to : holder + 1;
  }
  return { first, end };
}

/** Throws RangeError where the grid of the coast is beyond the hard limit of cells. */
export function refuseCoastSize({ nx, ny }: GridLayout): void {
  const { max } = LIMITS.cells;
  if (nx * ny > max)
    throw new RangeError(
      `The grid of the coast has at most ${max} cells; this one would have ${nx} × ${ny} = ${nx * ny}. Use a wider spacing of the coast.`,
    );
}

/**
 * Land mask [ny][nx], 1 water, from the land cells of the coast's own grid: each is divided where that is coarser; where
 * it is finer a cell is land when at least half of the finer cells in it are.
 */
export function maskFromCoast(setup: Pick<Setup, 'basin'>, own: GridLayout, coast: GridLayout): Uint8Array {
  const centres = ({ zonal, meridional }: GridLayout) => [
    Float64Array.from({ length: zonal.cells }, (_, i) => zonal.start + (i + 0.5) * zonal.spacing),
    Float64Array.from({ length: meridional.cells }, (_, j) => centreLatitude(meridional, j)),
  ];
  const raster = landMask(setup.basin, centres(coast)[0], centres(coast)[1]);
  const columns = decidingCells(own.zonal, coast.zonal);
  const rows = decidingCells(own.meridional, coast.meridional);
  const mask = new Uint8Array(own.nx * own.ny);
  for (let j = 0; j < own.ny; j++)
    for (let i = 0; i < own.nx; i++) {
      let wet = 0;
      for (let y = rows.first[j]; y < rows.end[j]; y++)
        for (let x = columns.first[i]; x < columns.end[i]; x++) wet += raster[y * coast.nx + x];
      const cells = (rows.end[j] - rows.first[j]) * (columns.end[i] - columns.first[i]);
      mask[j * own.nx + i] = 2 * wet > cells ? 1 : 0;
    }
  return mask;
}

/** Says what the coast's grid does to the run's, in sentences: empty where the two nest. */
export function coastNotes(own: GridLayout, coast: GridLayout): string[] {
  const nests = (a: Snapped, b: Snapped) => {
    const [few, many] = a.cells <= b.cells ? [a, b] : [b, a];
    return many.cells % few.cells === 0 && Math.abs(a.start - b.start) < 1e-6 * many.spacing;
  };
  if (nests(own.zonal, coast.zonal) && nests(own.meridional, coast.meridional)) return [];
  return [
    `The coast’s grid of ${coast.nx} × ${coast.ny} cells does not divide the run’s ${own.nx} × ${own.ny} evenly; each cell takes the land at its place.`,
  ];
}

/** Latitude of a row of cell centres, as the grid has it. */
export function centreLatitude({ start, spacing, equatorRow }: GridLayout['meridional'], j: number): number {
  return equatorRow === null ? start + (j + 0.5) * spacing : (j + 0.5 - equatorRow) * spacing;
}
