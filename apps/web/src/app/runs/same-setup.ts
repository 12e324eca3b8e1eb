import { type Setup } from '@halfdeep/ocean';
import { type Growth } from '../shared/plate/overlay';

/** Ranges that say the same must not redraw a plot: runs report their progress several times a second. */
export function sameRange(a: readonly [number, number], b: readonly [number, number]): boolean {
  return a[0] === b[0] && a[1] === b[1];
}

export function sameGrowth(a: Growth, b: Growth): boolean {
  return a.axis === b.axis && a.pen === b.pen && Object.is(a.upTo, b.upTo);
}

/** A setup is immutable once queued: a newly read copy must not rebuild grids. */
export function sameSetup(a: Setup, b: Setup): boolean {
  return a === b || JSON.stringify(a) === JSON.stringify(b);
}
