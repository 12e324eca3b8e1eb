import type { Geometry } from '../setup';

/**
 * A C-grid of nx × ny cells on a plane or a latitude band (numerics.md §2). η sits at cell centres, u on west faces,
 * v on south faces, f and ζ on south-west corners. How a model lays its fields out: stepper/layout.
 */
export interface Grid {
  geometry: Geometry;
  nx: number;
  ny: number;
  /** Zonally periodic: the west face of cell 0 is the east face of cell nx − 1. */
  periodic: boolean;
  /** Zonal spacing at cell centres and u points, [ny], m. */
  dxC: Float64Array;
  /** Zonal spacing at v points and corners, [ny + 1], m. */
  dxV: Float64Array;
  /** Meridional spacing, m. */
  dy: number;
  /** Longitudes of cell centres [nx] and of u points [nx + 1], degrees. */
  lonCentre: Float64Array;
  lonFace: Float64Array;
  /** Latitudes of cell centres [ny] and of v points [ny + 1], degrees. */
  latCentre: Float64Array;
  latFace: Float64Array;
  /** The same lines in metres from the plane's origin. */
  xCentre: Float64Array;
  xFace: Float64Array;
  yCentre: Float64Array;
  yFace: Float64Array;
  /** Coriolis parameter at v rows and corners, [ny + 1], 1/s. */
  f: Float64Array;
  /** β of the plane, 1/(m s); 0 on an f-plane. */
  beta: number;
  /** v row on which the equator lies, or null when the grid does not hold it. */
  equatorRow: number | null;
  /** [ny][nx], 1 water, 0 land. */
  mask: Uint8Array;
  wetCells: number;
  /** What snapping moved, in sentences. */
  notes: string[];
}

/** True when the cell is water; cells outside are land, unless the grid is periodic and i wraps. */
export function isWet(grid: Grid, i: number, j: number): boolean {
  const { nx, ny, periodic, mask } = grid;
  if (j < 0 || j >= ny) return false;
  const k = periodic ? ((i % nx) + nx) % nx : i;
  return k >= 0 && k < nx && mask[j * nx + k] === 1;
}

/** Shape of a plane in metres; see `planeGrid`. */
export interface PlaneOptions {
  nx: number;
  ny: number;
  /** Spacing, m. */
  dx: number;
  dy: number;
  /** Position of the south-west corner, m. */
  x0?: number;
  y0?: number;
  periodic?: boolean;
  /** Coriolis parameter at y, 1/s. */
  f: (y: number) => number;
  beta?: number;
  /** True where the cell with this centre is water; all water when left out. */
  isWater?: (x: number, y: number) => boolean;
}

/**
 * A Cartesian plane in metres, for analytic cases: the same grid type as `buildGrid`, with longitude and latitude
 * counted as metres / 111 194.9 (a degree on a sphere of 6371 km). Throws RangeError when a size is not positive.
 */
export function planeGrid(options: PlaneOptions): Grid {
  const { nx, ny, dx, dy, x0 = 0, y0 = 0, periodic = false, f, beta = 0, isWater } = options;
  const sizes = [nx, ny, dx, dy];
  if (!sizes.every((size) => Number.isFinite(size) && size > 0) || !Number.isInteger(nx) || !Number.isInteger(ny))
    throw new RangeError(
      `A plane needs whole numbers of cells and positive spacings; nx, ny, dx, dy = ${sizes.join(', ')} arrived.`,
    );
  const metresPerDegree = (6.371e6 * Math.PI) / 180;
  const xCentre = Float64Array.from({ length: nx }, (_, i) => x0 + (i + 0.5) * dx);
  const xFace = Float64Array.from({ length: nx + 1 }, (_, i) => x0 + i * dx);
  const yCentre = Float64Array.from({ length: ny }, (_, j) => y0 + (j + 0.5) * dy);
  const yFace = Float64Array.from({ length: ny + 1 }, (_, j) => y0 + j * dy);
  const degrees = (metres: Float64Array) => metres.map((value) => value / metresPerDegree);
  const mask = new Uint8Array(nx * ny);
  for (let j = 0; j < ny; j++)
    for (let i = 0; i < nx; i++) mask[j * nx + i] = !isWater || isWater(xCentre[i], yCentre[j]) ? 1 : 0;
  const equatorRow = yFace.findIndex((y) => Math.abs(y) < 1e-9 * dy);
  return {
    geometry: beta === 0 ? 'fplane' : equatorRow < 0 ? 'midlatitude' : 'equatorial',
    nx,
    ny,
    periodic,
    dxC: new Float64Array(ny).fill(dx),
    dxV: new Float64Array(ny + 1).fill(dx),
    dy,
    lonCentre: degrees(xCentre),
    lonFace: degrees(xFace),
    latCentre: degrees(yCentre),
    latFace: degrees(yFace),
    xCentre,
    xFace,
    yCentre,
    yFace,
    f: yFace.map((y) => f(y)),
    beta,
    equatorRow: equatorRow < 0 ? null : equatorRow,
    mask,
    wetCells: mask.reduce((sum, wet) => sum + wet, 0),
    notes: [],
  };
}
