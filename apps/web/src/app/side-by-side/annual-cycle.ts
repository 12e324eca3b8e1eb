import { YEAR } from '../shared/plate/ticks';

/** The annual harmonic of a record and its mean. `peakDay`: day of the year, 0 = 1 January, < 365. */
export interface AnnualCycle {
  mean: number;
  amplitude: number;
  peakDay: number;
}

/**
 * Least squares of mean + C cos(2πt/365 d) + S sin(2πt/365 d) on means over intervals of `intervalDays` that end on
 * `days`. Only intervals that lie inside `range`, whole years, count. What averaging takes from the amplitude is given back
 * (a mean over Δ keeps sinc(πΔ/365 d) of it). Null with fewer than four values or an interval of half a year and more.
 */
export function annualCycle(
  days: ArrayLike<number>,
  values: ArrayLike<number>,
  range: readonly [number, number],
  intervalDays: number,
): AnnualCycle | null {
  const half = (Math.PI * intervalDays) / YEAR;
  if (half >= Math.PI / 2) return null;
  // Normal equations of three unknowns: symmetric, solved by elimination.
  const m = [0, 1, 2].map(() => [0, 0, 0, 0]);
  let count = 0;
  for (let k = 0; k < days.length; k++) {
    const [day, value] = [days[k] ?? NaN, values[k] ?? NaN];
    if (!(day - intervalDays >= range[0] - 1e-6 && day <= range[1] + 1e-6) || Number.isNaN(value)) continue;
    const phase = (2 * Math.PI * (day - intervalDays / 2)) / YEAR;
    const row = [1, Math.cos(phase), Math.sin(phase), value];
    m.forEach((sums, i) => row.forEach((entry, j) => (sums[j] = (sums[j] ?? 0) + (row[i] ?? 0) * entry)));
    count++;
  }
  if (count < 4) return null;
  const [mean = NaN, c = NaN, s = NaN] = solved(m);
  const peak = (Math.atan2(s, c) * YEAR) / (2 * Math.PI);
  return { mean, amplitude: (Math.hypot(c, s) * half) / Math.sin(half), peakDay: (peak + YEAR) % YEAR };
}

/** Solves rows [a b c | d] by elimination; they are positive definite, so that no row need be exchanged. */
function solved(rows: number[][]): number[] {
  rows.forEach((pivot, i) => {
    const lead = pivot[i] ?? 1;
    for (let j = 0; j < pivot.length; j++) pivot[j] = (pivot[j] ?? 0) / lead;
    rows.forEach((row, k) => {
      const factor = row[i] ?? 0;
      if (k !== i) row.forEach((_, j) => (row[j] = (row[j] ?? 0) - factor * (pivot[j] ?? 0)));
    });
  });
  return rows.map((row) => row[row.length - 1] ?? NaN);
}
