import { RADIANS_PER_DEGREE } from '../exact/elementary';
import { DAYS_PER_YEAR, SECONDS_PER_DAY } from '../forcing/season';
import { gridLayout, type GridLayout } from '../grid/grid-layout';
import { betaAt, coriolisAt, planeOf, zonalShrink } from '../grid/plane';
import type { Setup } from '../setup';
import { windEstimate, type WindEstimate } from './thinning';
import { viscosityRange } from './viscosity-range';

export const SECONDS_PER_YEAR = DAYS_PER_YEAR * SECONDS_PER_DAY;

/** Rotation and lengths at one latitude: on a plane the same everywhere but for f. */
export interface Place {
  latitudeDeg: number;
  f: number;
  beta: number;
  /** Zonal spacing and extent. */
  dx: number;
  Lx: number;
}

/** Lengths, times and rates of a setup on its snapped grid; SI. Everything that the checks are made of. */
export interface Scales {
  layout: GridLayout;
  /** √(g′H). */
  c: number;
  /** f where the plane touches; of a sphere at the equator where the basin holds it, else in the middle. */
  f0: number;
  /** On a sphere where it is largest: nearest to the equator. */
  beta: number;
  /** Coriolis parameter at the southern and northern wall, and the larger size of the two. */
  fSouth: number;
  fNorth: number;
  fMax: number;
  /** f changes sign or vanishes inside, and β > 0. */
  holdsEquator: boolean;
  /** √(c/β); null without β. */
  trapping: number | null;
  /** (A/β)^(1/3) with the smallest A, and r/β; null without β. */
  munk: number | null;
  stommel: number | null;
  /** Largest zonal spacing, and the smallest: the same on a plane. */
  dx: number;
  dxSmallest: number;
  dy: number;
  /** Zonal extent, on a sphere where it is largest, and meridional extent. */
  Lx: number;
  Ly: number;
  dt: number;
  /** Degrees of longitude where they are longest. */
  metresPerDegreeLongitude: number;
  metresPerDegreeLatitude: number;
  /** Any latitude of the basin. */
  at: (latitudeDeg: number) => Place;
  /** The edge where |f| is largest. */
  poleward: Place;
  /** Where the basin's own waves are looked at: the reference latitude, or the middle of a sphere's band. */
  home: Place;
  /** Smallest and largest viscosity over the basin. */
  viscosity: { least: number; most: number };
  /** What the wind does to the layer. */
  wind: WindEstimate;
  /** What one second of step adds to S, F and νS of numerics.md §5, 1/s, and the Froude number; 0 in linear runs. */
  rates: StepRates;
  /** The time after which the layer has forgotten how it started (numerics.md §10), s. */
  memory: number;
}

export interface StepRates {
  gravity: number;
  coriolis: number;
  viscous: number;
  /** Largest speed over c that is expected before a nonlinear run; 0 for the linear equations. */
  froude: number;
}

/** What the wind estimate is made from. */
export type ScalesBeforeWind = Omit<Scales, 'wind' | 'rates'>;

/**
 * Scales of a setup that its schema accepts. No array is made, whatever the size of the grid. `known`: the estimate for
 * the same wind, layer and basin, where there is one already; else it is made when it is first asked for.
 */
export function scalesOf(setup: Setup, known?: WindEstimate): Scales {
  const { layer, friction, constants } = setup;
  const layout = gridLayout(setup);
  const { zonal, meridional } = layout;
  const plane = planeOf(setup);
  const [coriolis, betaHere, shrink] = [coriolisAt(setup), betaAt(setup), zonalShrink(setup)];
  const metresPerDegreeLatitude = constants.earthRadiusM * RADIANS_PER_DEGREE;
  const { equatorRow } = meridional;
  // Counted from the equator where there is one, so that an edge on it has f = 0 exactly.
  const southDeg = equatorRow === null ? meridional.start : -equatorRow * meridional.spacing;
  const northDeg = southDeg + layout.ny * meridional.spacing;
  const northExact = equatorRow === null ? northDeg : (layout.ny - equatorRow) * meridional.spacing;
  const at = (latitudeDeg: number): Place => {
    const dx = zonal.spacing * metresPerDegreeLatitude * shrink(latitudeDeg);
    const [f, beta] = [coriolis(latitudeDeg), betaHere(latitudeDeg)].map(numberOrNone);
    return { latitudeDeg, f, beta, dx, Lx: layout.nx * dx };
  };
  const [south, north] = [at(southDeg), at(northExact)];
  const nearest = at(Math.min(Math.max(0, southDeg), northExact));
  const poleward = Math.abs(north.f) >= Math.abs(south.f) ? north : south;
  const spherical = setup.basin.geometry === 'spherical';
  const home = at(spherical ? (southDeg + northExact) / 2 : plane.referenceDeg);
  const { beta, dx, Lx } = nearest;
  const dy = meridional.spacing * metresPerDegreeLatitude;
  const fMax = Math.abs(poleward.f);
  const c = Math.sqrt(layer.reducedGravityMS2 * layer.restThicknessM);
  const dxSmallest = Math.min(south.dx, north.dx);
  const perLength = Math.sqrt(1 / (dxSmallest * dxSmallest) + 1 / (dy * dy));
  const viscosity = viscosityRange(setup, layout);
  const scales: ScalesBeforeWind = {
    layout,
    c,
    f0: numberOrNone(plane.f0),
    beta,
    fSouth: south.f,
    fNorth: north.f,
    fMax,
    holdsEquator: beta > 0 && south.f <= 0 && north.f >= 0,
    trapping: beta > 0 ? Math.sqrt(c / beta) : null,
    munk: beta > 0 ? Math.cbrt(viscosity.least / beta) : null,
    stommel: beta > 0 ? friction.rayleighPerS / beta : null,
    dx,
    dxSmallest,
    dy,
    Lx,
    Ly: layout.ny * dy,
    dt: SECONDS_PER_DAY / setup.numerics.stepsPerDay,
    metresPerDegreeLongitude: metresPerDegreeLatitude * shrink(nearest.latitudeDeg),
    metresPerDegreeLatitude,
    at,
    poleward,
    home,
    viscosity,
    memory: memoryOf(setup, c, Lx, poleward),
  };
  let estimate = known;
  const wind = () => (estimate ??= windEstimate(setup, scales));
  return {
    ...scales,
    get wind() {
      return wind();
    },
    rates: {
      gravity: c * perLength,
      coriolis: fMax,
      viscous: viscosity.most * perLength * perLength,
      froude: setup.numerics.equations === 'nonlinear' ? Math.max(wind().froude, startFroude(setup)) : 0,
    },
  };
}

/** A rotation so slow that quotients by it leave the range of numbers counts as none. */
function numberOrNone(rotation: number): number {
  return Math.abs(rotation) < 1e-60 ? 0 : rotation;
}

/** A start from an anomaly lets waves go whose speed over c is |η|/H. */
function startFroude({ start, layer }: Setup): number {
  return 'amplitudeM' in start ? Math.abs(start.amplitudeM) / layer.restThicknessM : 0;
}

/**
 * min(Lx f²/(βc²) at the poleward edge, 1/κ), not less than 4Lx/c. Where no planetary wave crosses from wall to wall (no
 * β, or a periodic basin) the larger of 4Lx/c and 1/max(r, κ).
 */
function memoryOf(setup: Setup, c: number, Lx: number, poleward: Place): number {
  const kappa = setup.layer.dampingPerS;
  const fourCrossings = (4 * Lx) / c;
  if (!(poleward.beta > 0) || setup.basin.zonallyPeriodic) {
    const damping = Math.max(setup.friction.rayleighPerS, kappa);
    return Math.max(fourCrossings, damping > 0 ? 1 / damping : 0);
  }
  const crossing = (poleward.Lx * poleward.f * poleward.f) / (poleward.beta * c * c);
  return Math.max(fourCrossings, kappa > 0 ? Math.min(crossing, 1 / kappa) : crossing);
}
