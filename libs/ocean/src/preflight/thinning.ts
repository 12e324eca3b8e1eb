import { evaluatePattern, variesZonally } from '../forcing/pattern';
import { planeOf } from '../grid/build-grid';
import type { Setup, WindComponent, WindPattern } from '../setup';
import { SECONDS_PER_YEAR, type Scales } from './scales';

/** Latitudes at which the estimate is taken at most, besides those that the patterns themselves ask for. */
const MAX_ROWS = 160;
/** Patches whose own longitudes are looked at, the strongest first; all of them count at every place. */
const MAX_PATCHES = 10;
/** Half-width of the differences that give the curl, degrees: far below any length scale, far above rounding. */
const DIFFERENCE_DEG = 1e-4;

/** What a wind does to a linear layer, estimated before the run. */
export interface WindEstimate {
  /** e of numerics.md §10, the largest expected |η|/H; null without β. */
  thinning: number | null;
  /** Largest stress over the basin and the year that the amplitudes allow, N/m². */
  stress: number;
}

/**
 * e is the largest sum over components of |η|/H that linear theory expects. Within L_eq of the equator
 * τx X/(g′ρ0H²), elsewhere f² wE X/(g′βH²), wE = curl(τ/(ρ0 f)). X = Lx for a steady part, min(Lx, 2βc²/(f²ω)) for a
 * harmonic, and no more than √(2π) widths of a patch (its integral along longitude). A northward stress at the equator
 * is held by a slope over 2 L_eq instead of X.
 */
export function windEstimate(setup: Setup, scales: Scales): WindEstimate {
  const { trapping, beta, layout, f0 } = scales;
  const profiles = setup.wind.components.map((component) => profileOf(component, setup, scales));
  const { referenceDeg } = planeOf(setup);
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
  const [push, sumX, sumY] = [new Float64Array(n), new Float64Array(n), new Float64Array(n)];
  let thinning = 0;
  let stress = 0;
  for (const latitude of sampleLatitudes(setup, south, north, layout.ny)) {
    const f = f0 + beta * (latitude - referenceDeg) * scales.metresPerDegreeLatitude;
    const equatorial = trapping !== null && Math.abs(f) < beta * trapping;
    for (const sums of [push, sumX, sumY]) sums.fill(0);
    profiles.forEach((profile, k) => {
      const { taux, tauy, dTauxDy } = profile.across(latitude);
      const reach = profile.reach(f);
      const across = 2 * (trapping ?? 0) * profile.strength;
      for (let i = 0; i < n; i++) {
        const factor = factors[k * n + i];
        sumX[i] += Math.abs(taux * factor) * profile.strength;
        sumY[i] += Math.abs(tauy * factor) * profile.strength;
        push[i] += equatorial
          ? Math.abs(taux * factor) * reach + Math.abs(tauy * factor) * across
          : Math.abs(f * (tauy * slopes[k * n + i] - dTauxDy * factor) + beta * taux * factor) * reach;
      }
    });
    const scale = gPrime * setup.constants.densityKgM3 * H * H * (equatorial ? 1 : beta);
    for (let i = 0; i < n; i++) {
      stress = Math.max(stress, Math.hypot(sumX[i], sumY[i]));
      if (trapping !== null) thinning = Math.max(thinning, push[i] / scale);
    }
  }
  return { thinning: trapping === null ? null : thinning, stress };
}

/** The largest |η|/H that an analytic start brings with it; 0 at rest, null when it comes from another run. */
export function startThinning({ start, layer }: Setup): number | null {
  if (start.kind === 'state') return null;
  return start.kind === 'rest' ? 0 : Math.abs(start.amplitudeM) / layer.restThicknessM;
}

interface Profile {
  /** Stress along the pattern's own meridian, N/m², and its northward derivative, N/m³. */
  across: (latitudeDeg: number) => { taux: number; tauy: number; dTauxDy: number };
  /** Factor from there to another longitude, and its eastward derivative, 1/m. */
  along: (longitudeDeg: number) => { factor: number; slope: number };
  /** Σ |season part| X at a Coriolis parameter, m. */
  reach: (f: number) => number;
  /** Σ |season part|. */
  strength: number;
}

function profileOf(component: WindComponent, setup: Setup, scales: Scales): Profile {
  const { pattern, season } = component;
  const radius = setup.constants.earthRadiusM;
  const home = variesZonally(pattern) && 'longitudeDeg' in pattern ? pattern.longitudeDeg : scales.layout.zonal.start;
  const widest = 'widthLongitudeDeg' in pattern ? Math.sqrt(2 * Math.PI) * pattern.widthLongitudeDeg : Infinity;
  const across = (latitude: number) => {
    const at = evaluatePattern(pattern, home, latitude, radius);
    const above = evaluatePattern(pattern, home, latitude + DIFFERENCE_DEG, radius).taux;
    const below = evaluatePattern(pattern, home, latitude - DIFFERENCE_DEG, radius).taux;
    return { ...at, dTauxDy: (above - below) / (2 * DIFFERENCE_DEG * scales.metresPerDegreeLatitude) };
  };
  const strength = setup.wind.seasonalStrength;
  const yearly = (2 * Math.PI) / SECONDS_PER_YEAR;
  const parts = [
    { size: Math.abs(season.mean), omega: 0 },
    { size: Math.abs(strength * season.annual.amplitude), omega: yearly },
    { size: Math.abs(strength * season.semiannual.amplitude), omega: 2 * yearly },
  ].filter(({ size }) => size > 0);
  const { Lx, beta, c } = scales;
  const bound = Math.min(Lx, widest * scales.metresPerDegreeLongitude);
  return {
    across,
    along: zonalFactor(pattern, radius, scales.metresPerDegreeLongitude),
    reach: (f) =>
      parts.reduce(
        (sum, { size, omega }) =>
          sum + size * (omega === 0 || f === 0 ? bound : Math.min(bound, (2 * beta * c * c) / (f * f * omega))),
        0,
      ),
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
