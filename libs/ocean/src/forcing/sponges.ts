import { cos } from '../exact/elementary';
import type { Grid } from '../grid/grid';
import type { Basin, Setup, Sponge } from '../setup';
import type { SpongeRates } from '../stepper/model-options';

/**
 * r_max W/c of a sponge whose rate is left to the product: a normally incident wave comes back with
 * exp(−2 r_max W/(3c)) = 1 % of its amplitude (numerics.md §3).
 */
export const SPONGE_STRENGTH = 6.9;

/** In this order the rates of overlapping sponges add up, so that their order in the setup does not matter. */
const EDGES = ['west', 'east', 'south', 'north'] as const;

export function isZonal({ edge }: Pick<Sponge, 'edge'>): boolean {
  return edge === 'west' || edge === 'east';
}

/** How deep a place lies in a sponge: 0 at its inner edge and outside of it, 1 at the basin's edge and beyond. */
export function spongeDepth(sponge: Sponge, basin: Basin, longitudeDeg: number, latitudeDeg: number): number {
  const { widthDeg } = sponge;
  switch (sponge.edge) {
    case 'west':
      return clamped((basin.westDeg + widthDeg - longitudeDeg) / widthDeg);
    case 'east':
      return clamped((longitudeDeg - (basin.eastDeg - widthDeg)) / widthDeg);
    case 'south':
      return clamped((basin.southDeg + widthDeg - latitudeDeg) / widthDeg);
    case 'north':
      return clamped((latitudeDeg - (basin.northDeg - widthDeg)) / widthDeg);
  }
}

/** r_max of a sponge, 1/s: as set, or 6.9 c/W. c in m/s; metresPerDegree along the sponge's width. */
export function spongePeakRate(sponge: Sponge, c: number, metresPerDegree: number): number {
  return sponge.peakRatePerS ?? (SPONGE_STRENGTH * c) / (sponge.widthDeg * metresPerDegree);
}

/**
 * Rates that the sponges of a setup add to r at u and v points and to κ at cells, 1/s: r_max s² each, summed where two
 * overlap (numerics.md §3). Null where there is no sponge. On a sphere the default rate of a west or east sponge
 * follows the width of its latitude. A few passes over the grid.
 */
export function spongeRates(setup: Pick<Setup, 'basin' | 'layer'>, grid: Grid): SpongeRates | null {
  const { basin, layer } = setup;
  const sponges = EDGES.flatMap((edge) => basin.sponges.filter((sponge) => sponge.edge === edge));
  if (sponges.length === 0) return null;
  const { lonCentre, lonFace, latCentre, latFace, dxC, dxV, dy } = grid;
  const c = Math.sqrt(layer.reducedGravityMS2 * layer.restThicknessM);
  const dLon = lonFace[1] - lonFace[0];
  const dLat = latFace[1] - latFace[0];
  const field = (longitudes: Float64Array, latitudes: Float64Array, dx: Float64Array) => {
    const rates = new Float64Array(longitudes.length * latitudes.length);
    for (const sponge of sponges)
      for (let j = 0, k = 0; j < latitudes.length; j++) {
        const peak = spongePeakRate(sponge, c, isZonal(sponge) ? dx[j] / dLon : dy / dLat);
        for (const longitude of longitudes) {
          const s = spongeDepth(sponge, basin, longitude, latitudes[j]);
          rates[k++] += peak * s * s;
        }
      }
    return rates;
  };
  return {
    u: field(lonFace, latCentre, dxC),
    v: field(lonCentre, latFace, dxV),
    cell: field(lonCentre, latCentre, dxC),
  };
}

/** What is left of the wind inside sponges that taper it. */
export interface WindTaper {
  /** A sponge at the west or east edge makes it vary along a latitude. */
  variesZonally: boolean;
  /** Product of cos²(π s/2) over the tapering sponges, 1 outside of them. */
  at: (longitudeDeg: number, latitudeDeg: number) => number;
}

/** Null where no sponge tapers the wind. */
export function windTaper(basin: Basin): WindTaper | null {
  const sponges = EDGES.flatMap((edge) => basin.sponges.filter((sponge) => sponge.edge === edge && sponge.tapersWind));
  if (sponges.length === 0) return null;
  return {
    variesZonally: sponges.some(isZonal),
    at: (longitudeDeg, latitudeDeg) => {
      let factor = 1;
      for (const sponge of sponges) {
        const s = spongeDepth(sponge, basin, longitudeDeg, latitudeDeg);
        if (s >= 1) return 0;
        if (s <= 0) continue;
        const fall = cos((Math.PI / 2) * s);
        factor *= fall * fall;
      }
      return factor;
    },
  };
}

function clamped(share: number): number {
  return Math.min(1, Math.max(0, share));
}
