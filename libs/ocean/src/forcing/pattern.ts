import { cos, exp, RADIANS_PER_DEGREE } from '../exact/elementary';
import type { WindPattern } from '../setup';

/** Wind stress on the layer, N/m²; eastward and northward. */
export interface Stress {
  taux: number;
  tauy: number;
}

/**
 * Stress of a pattern alone (season factor 1) at a place, N/m². Degrees; earthRadiusM turns latitude into y for the
 * linear shear. The formulas are those written beside `WindPattern`.
 */
export function evaluatePattern(
  pattern: WindPattern,
  longitudeDeg: number,
  latitudeDeg: number,
  earthRadiusM: number,
): Stress {
  switch (pattern.kind) {
    case 'uniform':
      return { taux: pattern.eastwardNM2, tauy: pattern.northwardNM2 };
    case 'zonalBelt':
      return directed(
        pattern.direction,
        pattern.amplitudeNM2 * bell(latitudeDeg, pattern.latitudeDeg, pattern.widthDeg),
      );
    case 'gaussianPatch':
      return directed(
        pattern.direction,
        pattern.amplitudeNM2 *
          bell(longitudeDeg, pattern.longitudeDeg, pattern.widthLongitudeDeg) *
          bell(latitudeDeg, pattern.latitudeDeg, pattern.widthLatitudeDeg),
      );
    case 'linearShear': {
      const slope = pattern.stressNM2 / (pattern.overDistanceKm * 1000);
      const y = earthRadiusM * latitudeDeg * RADIANS_PER_DEGREE;
      return { taux: slope * y * taper(Math.abs(latitudeDeg), pattern.fullWithinDeg, pattern.zeroBeyondDeg), tauy: 0 };
    }
  }
}

/** True when a pattern depends on longitude. */
export function variesZonally(pattern: WindPattern): boolean {
  return pattern.kind === 'gaussianPatch';
}

function directed(direction: 'eastward' | 'northward', stress: number): Stress {
  return direction === 'eastward' ? { taux: stress, tauy: 0 } : { taux: 0, tauy: stress };
}

/** exp(−(x − centre)²/(2 width²)). */
function bell(x: number, centre: number, width: number): number {
  const distance = (x - centre) / width;
  return exp(-0.5 * distance * distance);
}

/** 1 within `full`, cos² to `zero`, 0 beyond; degrees. */
function taper(distance: number, full: number, zero: number): number {
  if (distance <= full) return 1;
  if (distance >= zero) return 0;
  const fall = cos(((Math.PI / 2) * (distance - full)) / (zero - full));
  return fall * fall;
}
