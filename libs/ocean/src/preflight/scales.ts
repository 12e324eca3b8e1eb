import { RADIANS_PER_DEGREE } from '../exact/elementary';
import { gridLayout, planeOf, type GridLayout } from '../grid/build-grid';
import { DAYS_PER_YEAR, SECONDS_PER_DAY } from '../forcing/season';
import type { Setup } from '../setup';

export const SECONDS_PER_YEAR = DAYS_PER_YEAR * SECONDS_PER_DAY;

/** Lengths, times and rates of a setup on its snapped grid; SI. Everything that the checks are made of. */
export interface Scales {
  layout: GridLayout;
  /** √(g′H). */
  c: number;
  f0: number;
  beta: number;
  /** Coriolis parameter at the southern and northern wall, and the larger size of the two. */
  fSouth: number;
  fNorth: number;
  fMax: number;
  /** f changes sign or vanishes inside, and β > 0. */
  holdsEquator: boolean;
  /** √(c/β); null without β. */
  trapping: number | null;
  /** (A/β)^(1/3) and r/β; null without β. */
  munk: number | null;
  stommel: number | null;
  dx: number;
  dy: number;
  /** Zonal and meridional extents. */
  Lx: number;
  Ly: number;
  dt: number;
  metresPerDegreeLongitude: number;
  metresPerDegreeLatitude: number;
  /** What one second of step adds to S, F and νS of numerics.md §5, 1/s. */
  rates: StepRates;
  /** The time after which the layer has forgotten how it started (numerics.md §10), s. */
  memory: number;
}

export interface StepRates {
  gravity: number;
  coriolis: number;
  viscous: number;
}

/** Scales of a setup that its schema accepts. No array is made, whatever the size of the grid. */
export function scalesOf(setup: Setup): Scales {
  const { layer, friction, constants } = setup;
  const layout = gridLayout(setup);
  const plane = planeOf(setup);
  const metresPerDegreeLatitude = constants.earthRadiusM * RADIANS_PER_DEGREE;
  const metresPerDegreeLongitude = metresPerDegreeLatitude * plane.cosReference;
  const dx = layout.zonal.spacing * metresPerDegreeLongitude;
  const dy = layout.meridional.spacing * metresPerDegreeLatitude;
  const { beta, f0 } = plane;
  const southY = (layout.meridional.start - plane.referenceDeg) * metresPerDegreeLatitude;
  const Ly = layout.ny * dy;
  const fSouth = f0 + beta * southY;
  // Counted from the equator where there is one, so that an edge on it has f = 0 exactly.
  const { equatorRow } = layout.meridional;
  const fNorth = equatorRow === null ? f0 + beta * (southY + Ly) : beta * (layout.ny - equatorRow) * dy;
  const fMax = Math.max(Math.abs(fSouth), Math.abs(fNorth));
  const c = Math.sqrt(layer.reducedGravityMS2 * layer.restThicknessM);
  const Lx = layout.nx * dx;
  const perLength = Math.sqrt(1 / (dx * dx) + 1 / (dy * dy));
  return {
    layout,
    c,
    f0,
    beta,
    fSouth,
    fNorth,
    fMax,
    holdsEquator: beta > 0 && fSouth <= 0 && fNorth >= 0,
    trapping: beta > 0 ? Math.sqrt(c / beta) : null,
    munk: beta > 0 ? Math.cbrt(friction.viscosityM2S / beta) : null,
    stommel: beta > 0 ? friction.rayleighPerS / beta : null,
    dx,
    dy,
    Lx,
    Ly,
    dt: SECONDS_PER_DAY / setup.numerics.stepsPerDay,
    metresPerDegreeLongitude,
    metresPerDegreeLatitude,
    rates: { gravity: c * perLength, coriolis: fMax, viscous: friction.viscosityM2S * perLength * perLength },
    memory: memoryOf(setup, { beta, c, fMax, Lx }),
  };
}

/**
 * min(Lx f²/(βc²) at the poleward edge, 1/κ), not less than 4Lx/c. Where no planetary wave crosses from wall to wall (no
 * β, or a periodic basin) the larger of 4Lx/c and 1/max(r, κ).
 */
function memoryOf(setup: Setup, { beta, c, fMax, Lx }: { beta: number; c: number; fMax: number; Lx: number }): number {
  const kappa = setup.layer.dampingPerS;
  const fourCrossings = (4 * Lx) / c;
  if (!(beta > 0) || setup.basin.zonallyPeriodic) {
    const damping = Math.max(setup.friction.rayleighPerS, kappa);
    return Math.max(fourCrossings, damping > 0 ? 1 / damping : 0);
  }
  const crossing = (Lx * fMax * fMax) / (beta * c * c);
  return Math.max(fourCrossings, kappa > 0 ? Math.min(crossing, 1 / kappa) : crossing);
}
