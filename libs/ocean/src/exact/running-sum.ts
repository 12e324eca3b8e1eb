/** Slots of one compensated sum in a Float64Array: the sum and its lost low-order part. */
export const SUM_SLOTS = 2;

/**
 * Adds `value` to the compensated sum at `slot` of `sums` (Neumaier 1974): the error of many additions stays that of
 * one. Lives in a Float64Array so that a checkpoint keeps its exact bits.
 */
export function addTo(sums: Float64Array, slot: number, value: number): void {
  const sum = sums[slot];
  const next = sum + value;
  sums[slot + 1] += Math.abs(sum) >= Math.abs(value) ? sum - next + value : value - next + sum;
  sums[slot] = next;
}

/** Value of the compensated sum at `slot`. */
export function sumAt(sums: Float64Array, slot: number): number {
  return sums[slot] + sums[slot + 1];
}
