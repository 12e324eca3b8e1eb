import { evaluatePattern, variesZonally } from '../forcing/pattern';
import { DAYS_PER_YEAR, SECONDS_PER_DAY } from '../forcing/season';
import { spongeDepth, windTaper } from '../forcing/sponges';
import type { Setup, WindComponent, WindPattern } from '../setup';
import type { Place, ScalesBeforeWind } from './scales';

/** Latitudes at which the estimate is taken at most, besides those that the patterns themselves ask for. */
const MAX_ROWS = 160;
/** Patches whose own longitudes are looked at, the strongest first; all of them count at every place. */
const MAX_PATCHES = 10;
/** Half-width of the differences that give the curl, degrees: far below any length scale, far above rounding. */
const DIFFERENCE_DEG = 1e-4;

/** What a wind does to the layer, estimated before the run from linear theory. */
export interface WindEstimate {
  /** e of numerics.md §10, the largest expected |η|/H; null without β. */
  thinning: number | null;
  /** Largest stress over the basin and the year that the amplitudes allow, N/m². */
  stress: number;
  /** Largest expected speed over c (numerics.md §5), ≥ 0. */
  froude: number;
}

/**
 * e is the largest sum over components of |η|/H that linear theory expects. Within L_eq of the equator
 * τx X/(g′ρ0H²), elsewhere f² wE X/(g′βH²), wE = curl(τ/(ρ0 f)). X = Lx for a steady part, min(Lx, 2βc²/(f²ω)) for a
 * harmonic, and no more than √(2π) widths of a patch (its integral along longitude). A northward stress at the equator
 * is held by a slope over 2 L_eq instead of X.
 *
 * The Froude number is the largest of |τ| T/(ρ0Hc) with T = 1/√(βc) (1/|f| without β), of the Sverdrup zonal speed
 * X |∂²τx/∂y²|/(ρ0βH) over c, and of |τ| X/(ρ0g′H²): numerics.md §5. Inside sponges the layer is damped: nothing is
 * estimated there but the stress that they leave.
 */
export function windEstimate(setup: Setup, scales: ScalesBeforeWind): WindEstimate {
  const { wind, basin, layer, constants, numerics } = setup;
  const makings = JSON.stringify([wind, basin, layer, constants, numerics.spacingLongitudeDeg, numerics.spacingLatitudeDeg]); // prettier-ignore
  if (last.makings !== makings) last = { makings, estimate: estimateOf(setup, scales) };
  return last.estimate;
}

/** A remedy that is tried is looked at several times in a row. */
let last: { makings: string; estimate: WindEstimate } = { makings: '', estimate: { thinning: null, stress: 0, froude: 0 } }; // prettier-ignore

function estimateOf(setup: Setup, scales: ScalesBeforeWind): WindEstimate {
  const { trapping, layout, c } = scales;
  const { basin, constants } = setup;
  const profiles = setup.wind.components.map((component) => profileOf(component, setup, scales));
  const south = layout.meridional.start;
  const north = south + layout.ny * layout.meridional.spacing;
  const west = layout.zonal.start;
  const longitudes = sampleLongitudes(setup, west, west + layout.nx * layout.zonal.spacing);
  // [component][longitude]
  const n = longitudes.length;
  const factors = new Float64Array(profiles.length * n);
  const slopes = new Float64Array(profiles.length * n);
  profiles.forEach((profile, k) =>
    longitudes.forEach((longitude, i) => {
      const { factor, slope } = profile.along(longitude);
      factors[k * n + i] = factor;
      slopes[k * n + i] = slope;
    }),
  );
  const { reducedGravityMS2: gPrime, restThicknessM: H } = setup.layer;
  const density = constants.densityKgM3;
  const taper = windTaper(basin);
  const sphere = basin.geometry === 'spherical';
  const damped = (longitude: number, latitude: number) =>
    basin.sponges.some((sponge) => spongeDepth(sponge, basin, longitude, latitude) > 0);
  const [push, slope, speed, sumX, sumY] = [0, 1, 2, 3, 4].map(() => new Float64Array(n));
  let [thinning, stress, froude] = [0, 0, 0];
  for (const latitude of sampleLatitudes(setup, south, north, layout.ny)) {
    const place = scales.at(latitude);
    const { f, beta } = place;
    // A degree of longitude here over one where the slopes along it were taken.
    const shrunk = place.dx / scales.dx;
    const away = (step: number) => (sphere ? scales.at(latitude + step).dx / place.dx : 1);
    const [toSouth, toNorth] = [away(-DIFFERENCE_DEG), away(DIFFERENCE_DEG)];
    const equatorial = trapping !== null && Math.abs(f) < scales.beta * trapping;
    for (const sums of [push, slope, speed, sumX, sumY]) sums.fill(0);
    profiles.forEach((profile, k) => {
      const { taux, tauy, dTauxDy, curvature } = profile.across(latitude, toSouth, toNorth);
      const reach = profile.reach(place);
      const across = 2 * (trapping ?? 0) * profile.strength;
      for (let i = 0; i < n; i++) {
        const factor = factors[k * n + i];
        const held = Math.abs(taux * factor) * reach + Math.abs(tauy * factor) * (trapping === null ? reach : across);
        sumX[i] += Math.abs(taux * factor) * profile.strength;
        sumY[i] += Math.abs(tauy * factor) * profile.strength;
        slope[i] += held;
        speed[i] += Math.abs(curvature * factor) * reach;
        push[i] += equatorial
          ? held
          : Math.abs(f * ((tauy * slopes[k * n + i]) / shrunk - dTauxDy * factor) + beta * taux * factor) * reach;
      }
    });
    const scale = gPrime * density * H * H;
    const adjustment = beta > 0 ? 1 / Math.sqrt(beta * c) : f === 0 ? 0 : 1 / Math.abs(f);
    for (let i = 0; i < n; i++) {
      const size = Math.hypot(sumX[i], sumY[i]);
      stress = Math.max(stress, taper ? taper.at(longitudes[i], latitude) * size : size);
      if (damped(longitudes[i], latitude)) continue;
      if (trapping !== null) thinning = Math.max(thinning, push[i] / (equatorial ? scale : scale * beta));
      const sverdrup = beta > 0 ? speed[i] / (density * beta * H * c) : 0;
      froude = Math.max(froude, (size * adjustment) / (density * H * c), sverdrup, slope[i] / scale);
    }
  }
  return { thinning: trapping === null ? null : thinning, stress, froude };
}

/** The largest |η|/H that an analytic start brings with it; 0 at rest, null when it comes from another run. */
export function startThinning({ start, layer }: Setup): number | null {
  if (start.kind === 'state') return null;
  return start.kind === 'rest' ? 0 : Math.abs(start.amplitudeM) / layer.restThicknessM;
}

interface Profile {
  /**
   * Stress along the pattern's own meridian, N/m², its northward derivative (on a sphere ∂(cos φ τx)/cos φ), N/m³, and
   * its second one. toSouth, toNorth: cos φ a difference away over cos φ here.
   */
  across: (
    latitudeDeg: number,
    toSouth: number,
    toNorth: number,
  ) => { taux: number; tauy: number; dTauxDy: number; curvature: number };
  /** Factor from there to another longitude, and its eastward derivative, 1/m. */
  along: (longitudeDeg: number) => { factor: number; slope: number };
  /** Σ |season part| X at a place, m. */
  reach: (place: Place) => number;
  /** Σ |season part|. */
  strength: number;
}

function profileOf(component: WindComponent, setup: Setup, scales: ScalesBeforeWind): Profile {
  const { pattern, season } = component;
  const radius = setup.constants.earthRadiusM;
  const home = variesZonally(pattern) && 'longitudeDeg' in pattern ? pattern.longitudeDeg : scales.layout.zonal.start;
  const widest = 'widthLongitudeDeg' in pattern ? Math.sqrt(2 * Math.PI) * pattern.widthLongitudeDeg : Infinity;
  const step = DIFFERENCE_DEG * scales.metresPerDegreeLatitude;
  const across = (latitude: number, toSouth: number, toNorth: number) => {
    const at = evaluatePattern(pattern, home, latitude, radius);
    const above = evaluatePattern(pattern, home, latitude + DIFFERENCE_DEG, radius).taux;
    const below = evaluatePattern(pattern, home, latitude - DIFFERENCE_DEG, radius).taux;
    return {
      ...at,
      dTauxDy: (toNorth * above - toSouth * below) / (2 * step),
      curvature: (above - 2 * at.taux + below) / (step * step),
    };
  };
  const strength = setup.wind.seasonalStrength;
  const yearly = (2 * Math.PI) / (DAYS_PER_YEAR * SECONDS_PER_DAY);
  const parts = [
    { size: Math.abs(season.mean), omega: 0 },
    { size: Math.abs(strength * season.annual.amplitude), omega: yearly },
    { size: Math.abs(strength * season.semiannual.amplitude), omega: 2 * yearly },
  ].filter(({ size }) => size > 0);
  const { c, dx } = scales;
  return {
    across,
    along: zonalFactor(pattern, radius, scales.metresPerDegreeLongitude),
    reach: (place) => {
      const bound = Math.min(place.Lx, (widest * scales.metresPerDegreeLongitude * place.dx) / dx);
      return parts.reduce((sum, { size, omega }) => {
        // Without β nothing but the basin bounds it.
        const free = omega === 0 || place.f === 0 || place.beta === 0;
        return sum + size * (free ? bound : Math.min(bound, (2 * place.beta * c * c) / (place.f * place.f * omega)));
      }, 0);
    },
    strength: parts.reduce((sum, { size }) => sum + size, 0),
  };
}

/** A pattern that varies with longitude is a product of one function of each coordinate. */
function zonalFactor(pattern: WindPattern, radius: number, metresPerDegree: number): Profile['along'] {
  if (!variesZonally(pattern) || !('longitudeDeg' in pattern)) return () => ({ factor: 1, slope: 0 });
  const at = (longitude: number) => {
    const { taux, tauy } = evaluatePattern(pattern, longitude, pattern.latitudeDeg, radius);
    return pattern.direction === 'eastward' ? taux : tauy;
  };
  const full = at(pattern.longitudeDeg);
  if (full === 0) return () => ({ factor: 0, slope: 0 });
  return (longitude) => ({
    factor: at(longitude) / full,
    slope:
      (at(longitude + DIFFERENCE_DEG) - at(longitude - DIFFERENCE_DEG)) / (2 * DIFFERENCE_DEG * metresPerDegree * full),
  });
}

function sampleLatitudes(setup: Setup, south: number, north: number, ny: number): number[] {
  const rows = Math.min(ny, MAX_ROWS);
  const samples = Array.from({ length: rows }, (_, j) => south + ((j + 0.5) * (north - south)) / rows);
  for (const { pattern } of setup.wind.components) {
    if (pattern.kind === 'zonalBelt') samples.push(...around(pattern.latitudeDeg, pattern.widthDeg));
    if (pattern.kind === 'gaussianPatch') samples.push(...around(pattern.latitudeDeg, pattern.widthLatitudeDeg));
  }
  return samples.filter((latitude) => latitude >= south && latitude <= north);
}

function sampleLongitudes(setup: Setup, west: number, east: number): number[] {
  const patches = setup.wind.components.flatMap(({ pattern }) => (pattern.kind === 'gaussianPatch' ? [pattern] : []));
  const strongest = patches.sort((a, b) => Math.abs(b.amplitudeNM2) - Math.abs(a.amplitudeNM2)).slice(0, MAX_PATCHES);
  const samples = strongest.flatMap((patch) => [-1, 0, 1].map((k) => patch.longitudeDeg + k * patch.widthLongitudeDeg));
  return [(west + east) / 2, ...samples].filter((longitude) => longitude >= west && longitude <= east);
}

/** Where a Gaussian and its derivative are largest. */
function around(centre: number, width: number): number[] {
  return [-1, -0.5, 0, 0.5, 1].map((k) => centre + k * width);
}
