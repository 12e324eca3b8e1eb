import { DAYS_PER_YEAR } from '../forcing/season';

/** Two numbers of a transport over the last model year of a run, in the unit of the series. */
export interface TransportMeasures {
  /** Mean over the window. */
  mean: number;
  /** Half the way from the smallest to the largest interval mean in the window. */
  amplitude: number;
  /** Largest |value| in the window: what a difference is small or large against. */
  largest: number;
  /** The window, model days; `wholeYear` false when the run or its intervals do not hold exactly 365 d. */
  window: { fromDay: number; toDay: number; records: number; wholeYear: boolean };
}

/**
 * Measures of a series of interval means over its last 365 days, or over all of it when it is shorter.
 * values: one a record, oldest first, none NaN. intervalDays: length of a record. lastDay: model day on which the last one ends.
 * Null when there is no record.
 */
export function transportMeasures(
  values: ArrayLike<number>,
  intervalDays: number,
  lastDay: number,
): TransportMeasures | null {
  const records = Math.min(values.length, Math.max(1, Math.floor(DAYS_PER_YEAR / intervalDays + 1e-9)));
  if (records === 0) return null;
  let sum = 0;
  let [least, most] = [Infinity, -Infinity];
  for (let k = values.length - records; k < values.length; k++) {
    sum += values[k];
    least = Math.min(least, values[k]);
    most = Math.max(most, values[k]);
  }
  const days = records * intervalDays;
  return {
    mean: sum / records,
    amplitude: (most - least) / 2,
    largest: Math.max(Math.abs(least), Math.abs(most)),
    window: {
      fromDay: lastDay - days,
      toDay: lastDay,
      records,
      wholeYear: Math.abs(days - DAYS_PER_YEAR) < 1e-6,
    },
  };
}
