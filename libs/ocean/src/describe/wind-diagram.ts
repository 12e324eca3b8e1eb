import { evaluatePattern } from '../forcing/pattern';
import { DAYS_PER_YEAR, harmonic } from '../forcing/season';
import { windTaper } from '../forcing/sponges';
import { gridLayout, planeOf } from '../grid/build-grid';
import { betaAt, coriolisAt, zonalShrink } from '../grid/plane';
import { RADIANS_PER_DEGREE } from '../exact/elementary';
import type { Season, Setup } from '../setup';

export interface WindDiagramOptions {
  /** Longitude of the cut, degrees; the middle of the basin when left out. */
  longitudeDeg?: number;
  /** Latitudes, at most; the rows of the grid when those are fewer. */
  rows?: number;
  /** Columns over the year: 73 pentads unless said otherwise. */
  columns?: number;
}

/** The wind of a setup along one meridian through a model year; arrays are [latitude][day], row-major. */
export interface WindDiagram {
  longitudeDeg: number;
  /** South to north, degrees. */
  latDeg: Float64Array;
  /** Model day of the year, the middle of each column. */
  day: Float64Array;
  shape: [rows: number, columns: number];
  /** Eastward and northward stress, N/m². */
  taux: Float32Array;
  tauy: Float32Array;
  /** ∂τy/∂x − ∂τx/∂y, N/m³. */
  curl: Float32Array;
  /** Ekman pumping curl(τ/(ρ0 f)), m/s, upwards positive; NaN within L_eq of the equator and where f is 0. */
  pumping: Float32Array;
  /** L_eq as degrees of latitude; null without β. */
  blankWithinDeg: number | null;
}

/** Half-width of the differences that give the derivatives, degrees. */
const DIFFERENCE_DEG = 1e-3;

/**
 * Stress, its curl and its Ekman pumping along a meridian through the year, once every switch-on is over, as sponges leave
 * it. On the setup's plane: ∂/∂x at the scale of the plane's reference latitude, f = f0 + βy; on a sphere with f = 2Ω sin φ
 * and the curl's metric term. A few milliseconds.
 */
export function windDiagram(setup: Setup, options: WindDiagramOptions = {}): WindDiagram {
  const { basin, constants, wind, layer } = setup;
  const { zonal, meridional } = gridLayout(setup);
  const plane = planeOf(setup);
  const metresPerDegree = constants.earthRadiusM * RADIANS_PER_DEGREE;
  const longitudeDeg = options.longitudeDeg ?? (basin.westDeg + basin.eastDeg) / 2;
  const rows = Math.min(meridional.cells, options.rows ?? 140);
  const columns = options.columns ?? 73;
  const height = (meridional.cells * meridional.spacing) / rows;
  const latDeg = Float64Array.from({ length: rows }, (_, j) => meridional.start + (j + 0.5) * height);
  const day = Float64Array.from({ length: columns }, (_, k) => ((k + 0.5) * DAYS_PER_YEAR) / columns);
  const c = Math.sqrt(layer.reducedGravityMS2 * layer.restThicknessM);
  const blank = plane.beta > 0 ? Math.sqrt(c / plane.beta) : 0;
  const factors = wind.components.map(({ season }) =>
    Array.from(day, (at) => settledFactor(season, at / DAYS_PER_YEAR, wind.seasonalStrength)),
  );
  const field = () => new Float32Array(rows * columns);
  const diagram: WindDiagram = {
    longitudeDeg: Math.min(Math.max(longitudeDeg, zonal.start), zonal.start + zonal.cells * zonal.spacing),
    latDeg,
    day,
    shape: [rows, columns],
    taux: field(),
    tauy: field(),
    curl: field(),
    pumping: field(),
    blankWithinDeg: plane.beta > 0 ? blank / metresPerDegree : null,
  };
  const taper = windTaper(basin);
  const coriolis = coriolisAt(setup);
  const betaHere = betaAt(setup);
  const shrink = zonalShrink(setup);
  for (let j = 0; j < rows; j++) {
    const [toSouth, toNorth] = [-DIFFERENCE_DEG, DIFFERENCE_DEG].map((away) => shrink(latDeg[j] + away) / shrink(latDeg[j])); // prettier-ignore
    const parts = wind.components.map(({ pattern }) => {
      const at = (dLon: number, dLat: number) => {
        const [longitude, latitude] = [diagram.longitudeDeg + dLon, latDeg[j] + dLat];
        const { taux, tauy } = evaluatePattern(pattern, longitude, latitude, constants.earthRadiusM);
        const left = taper ? taper.at(longitude, latitude) : 1;
        return { taux: left * taux, tauy: left * tauy };
      };
      const eastward = at(DIFFERENCE_DEG, 0).tauy - at(-DIFFERENCE_DEG, 0).tauy;
      const northward = toNorth * at(0, DIFFERENCE_DEG).taux - toSouth * at(0, -DIFFERENCE_DEG).taux;
      const width = 2 * DIFFERENCE_DEG * metresPerDegree;
      return { ...at(0, 0), curl: eastward / (width * shrink(latDeg[j])) - northward / width };
    });
    const f = coriolis(latDeg[j]);
    const beta = betaHere(latDeg[j]);
    const blanked = f === 0 || Math.abs(f) < beta * blank;
    for (let k = 0; k < columns; k++) {
      let [taux, tauy, curl] = [0, 0, 0];
      parts.forEach((part, index) => {
        taux += factors[index][k] * part.taux;
        tauy += factors[index][k] * part.tauy;
        curl += factors[index][k] * part.curl;
      });
      const cell = j * columns + k;
      diagram.taux[cell] = taux;
      diagram.tauy[cell] = tauy;
      diagram.curl[cell] = curl;
      // curl(τ/f) = curl τ/f + β τx/f².
      diagram.pumping[cell] = blanked ? NaN : (curl / f + (beta * taux) / (f * f)) / constants.densityKgM3;
    }
  }
  return diagram;
}

/** The factor of a season once its switch-on is over. */
function settledFactor({ mean, annual, semiannual }: Season, yearFraction: number, strength: number): number {
  return (
    mean +
    strength *
      (annual.amplitude * harmonic(yearFraction, annual.peakDay, 1) +
        semiannual.amplitude * harmonic(yearFraction, semiannual.peakDay, 2))
  );
}
