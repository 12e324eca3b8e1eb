import { type Setup } from '@halfdeep/ocean';

/** A setup is immutable once queued: a newly read copy must not rebuild grids. */
export function sameSetup(a: Setup, b: Setup): boolean {
  return a === b || JSON.stringify(a) === JSON.stringify(b);
}
