import { type Setup, planeOf } from '@halfdeep/ocean';
import { formatQuantity } from '../../core/format';
import { type TheoryLine } from './overlay';

const SECONDS_PER_DAY = 86_400;

/** c = √(g′H), m/s. */
export function gravityWaveSpeed(layer: Setup['layer']): number {
  return Math.sqrt(layer.reducedGravityMS2 * layer.restThicknessM);
}

/** Equatorial trapping scale √(c/β), degrees of latitude; null off the equatorial plane. */
export function trappingScaleDeg(setup: Setup): number | null {
  if (setup.basin.geometry !== 'equatorial') return null;
  const { beta } = planeOf(setup);
  const metres = Math.sqrt(gravityWaveSpeed(setup.layer) / beta);
  return (metres / setup.constants.earthRadiusM) * (180 / Math.PI);
}

/** Whether theory lines of equatorial waves have a meaning along this latitude: within one trapping scale. */
export function hasEquatorialTheory(setup: Setup, latitudeDeg: number): boolean {
  const scale = trappingScaleDeg(setup);
  return scale !== null && Math.abs(latitudeDeg) <= scale;
}

/**
 * Lines of a Kelvin wave (c eastward) and of the first long Rossby wave (c/3 westward; Matsuno 1966) across the basin,
 * inside days `low` to `high`: where they begin is free, only their slope is theory.
 */
export function theoryLines(setup: Setup, west: number, east: number, low: number, high: number): TheoryLine[] {
  const c = gravityWaveSpeed(setup.layer);
  const metres = ((east - west) * Math.PI * setup.constants.earthRadiusM) / 180;
  const kelvinDays = metres / c / SECONDS_PER_DAY;
  const rossbyDays = 3 * kelvinDays;
  const room = high - low;
  const kelvinFrom = low + Math.max(0, 0.62 * room - kelvinDays / 2);
  const rossbyFrom = low + Math.max(0, 0.36 * room - rossbyDays / 2);
  const speed = (value: number) => formatQuantity(value, 'm/s', { decimals: 2 });
  return [
    { from: [west, kelvinFrom], to: [east, kelvinFrom + kelvinDays], name: `Kelvin ${speed(c)}`, dashed: false },
    {
      from: [east, rossbyFrom],
      to: [west, rossbyFrom + rossbyDays],
      name: `Rossby, n = 1: ${speed(c / 3)}`,
      dashed: true,
    },
  ];
}
