import { formatLatitude, formatLongitude, formatNumber } from '../../core/format';

/** Labelled ticks, and the stops between which the graduated frame is inked alternately. */
export interface AxisTicks {
  values: number[];
  labels: string[];
  stops: number[];
  /** Whether the first stretch is inked: decided by its place on the axis, so that moving the view does not flip it. */
  inkFirst: boolean;
}

const DEGREE_STEPS = [0.01, 0.02, 0.05, 0.1, 0.2, 0.5, 1, 2, 5, 10, 20, 30, 60, 90];
const MONTH_STARTS = [0, 31, 59, 90, 120, 151, 181, 212, 243, 273, 304, 334];
const MONTHS = ['Jan', 'Feb', 'Mar', 'Apr', 'May', 'Jun', 'Jul', 'Aug', 'Sep', 'Oct', 'Nov', 'Dec'];
/** Days of the model year: every year has 365. */
export const YEAR = 365;

function multiples(low: number, high: number, step: number): number[] {
  const first = Math.ceil(low / step - 1e-6);
  const last = Math.floor(high / step + 1e-6);
  return Array.from({ length: Math.max(0, last - first + 1) }, (_, k) => Number(((first + k) * step).toPrecision(12)));
}

/** Degrees: labels at least `roomPx` apart, the frame inked at half of their step (5° when labels stand every 10°). */
export function degreeTicks(
  kind: 'latitude' | 'longitude',
  low: number,
  high: number,
  lengthPx: number,
  roomPx = kind === 'latitude' ? 34 : 58,
): AxisTicks {
  const wanted = ((high - low) * roomPx) / Math.max(1, lengthPx);
  const step = DEGREE_STEPS.find((candidate) => candidate >= wanted) ?? 90;
  const values = multiples(low, high, step);
  return {
    values,
    labels: values.map((value) => (kind === 'latitude' ? formatLatitude(value) : formatLongitude(value))),
    stops: withEnds(multiples(low, high, step / 2), low, high),
    inkFirst: isEven(Math.floor(low / (step / 2) + 1e-6)),
  };
}

/** A number at a tick: as short as it can be, "20" and not "20.00"; very large and small ones as a power of ten. */
export function tickNumber(value: number, signed = false): string {
  const size = Math.abs(value);
  if (size !== 0 && (size >= 1e6 || size < 1e-3)) return formatNumber(value, { significant: 2, signed });
  return formatNumber(Number(value.toPrecision(4)), { signed });
}

/** Plain numbers: steps of 1, 2, 5 × 10^k. */
export function valueTicks(low: number, high: number, lengthPx: number, label: (value: number) => string): AxisTicks {
  const wanted = ((high - low) * 36) / Math.max(1, lengthPx);
  const decade = 10 ** Math.floor(Math.log10(wanted || 1));
  const step = ([1, 2, 5].find((nice) => nice * decade >= wanted) ?? 10) * decade;
  const values = multiples(low, high, step);
  return { values, labels: values.map(label), stops: [], inkFirst: false };
}

/**
 * Model time in days: labels at years, quarters, months or days, whichever fit; frame inked by the next finer unit.
 * Years are counted from 0: day 365 opens "year 1".
 */
export function timeTicks(lowDay: number, highDay: number, lengthPx: number, roomPx: number): AxisTicks {
  const wanted = ((highDay - lowDay) * roomPx) / Math.max(1, lengthPx);
  if (wanted > 92) {
    const years = [1, 2, 5, 10, 20, 50, 100].find((n) => n * YEAR >= wanted) ?? 200;
    const values = multiples(lowDay, highDay, years * YEAR);
    const fine = years === 1 ? YEAR / 2 : (years * YEAR) / 2;
    return {
      values,
      labels: values.map((day, k) => (k === 0 ? `year ${day / YEAR}` : String(day / YEAR))),
      stops: withEnds(multiples(lowDay, highDay, fine), lowDay, highDay),
      inkFirst: isEven(Math.floor(lowDay / fine + 1e-6)),
    };
  }
  if (wanted > 14) {
    const months = wanted > 31 ? 3 : 1;
    const values = monthStarts(lowDay, highDay, months);
    return {
      values,
      labels: values.map(monthLabel),
      stops: withEnds(monthStarts(lowDay, highDay, 1), lowDay, highDay),
      inkFirst: isEven(monthNumber(lowDay)),
    };
  }
  const step = [0.25, 0.5, 1, 2, 5, 10].find((n) => n >= wanted) ?? 10;
  const values = multiples(lowDay, highDay, step);
  return {
    values,
    labels: values.map((day) => `day ${day}`),
    stops: withEnds(values, lowDay, highDay),
    inkFirst: isEven(Math.floor(lowDay / step + 1e-6)),
  };
}

function monthStarts(low: number, high: number, every: number): number[] {
  const days: number[] = [];
  for (let year = Math.floor(low / YEAR); year * YEAR <= high; year++)
    for (let month = 0; month < 12; month += every) {
      const day = year * YEAR + (MONTH_STARTS[month] ?? 0);
      if (day >= low - 1e-6 && day <= high + 1e-6) days.push(day);
    }
  return days;
}

/** Months since day 0 of the month that holds the day. */
function monthNumber(day: number): number {
  const year = Math.floor(day / YEAR + 1e-9);
  const inYear = day - year * YEAR + 1e-6;
  return 12 * year + MONTH_STARTS.filter((start) => start <= inYear).length - 1;
}

function monthLabel(day: number): string {
  const inYear = ((day % YEAR) + YEAR) % YEAR;
  if (inYear === 0) return `year ${Math.round(day / YEAR)}`;
  return MONTHS[MONTH_STARTS.indexOf(inYear)] ?? '';
}

function withEnds(stops: number[], low: number, high: number): number[] {
  const inside = stops.filter((stop) => stop > low && stop < high);
  return [low, ...inside, high];
}

function isEven(n: number): boolean {
  return ((n % 2) + 2) % 2 === 0;
}
