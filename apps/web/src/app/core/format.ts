/**
 * Every number on screen goes through here: narrow no-break space between thousands, no-break space before
 * the unit, true minus, "1.00 → 1.20" for a change. No function rounds what it is not told to round.
 */
export const NARROW = '\u202f';
/** Between a number and its unit. */
export const SPACE = '\u00a0';
export const MINUS = '\u2212';
/** Shown where there is no value: an en dash, never a zero. */
export const NO_VALUE = '\u2013';
/** A model year has 365 days. */
export const DAYS_PER_YEAR = 365;

export interface NumberOptions {
  /** Exactly so many decimals; without it as many as the value has, at most six. */
  decimals?: number;
  /** So many significant digits instead; beyond 10⁶ or below 10⁻³ as "3 × 10⁻¹⁴". */
  significant?: number;
  /** A plus sign before positive values. */
  signed?: boolean;
}

export interface NumberParts {
  /** "3.10" or "1 234.5", sign included. */
  mantissa: string;
  /** Power of ten, or null when the number is written out. */
  exponent: number | null;
}

/** A number in parts, so that a template can raise its exponent. */
export function numberParts(value: number, options: NumberOptions = {}): NumberParts {
  if (!Number.isFinite(value)) return { mantissa: NO_VALUE, exponent: null };
  const { decimals, significant, signed } = options;
  const size = Math.abs(value);
  if (significant !== undefined && size !== 0 && (size >= 1e6 || size < 1e-3)) {
    const [digits = '', power = '0'] = size.toExponential(significant - 1).split('e');
    return { mantissa: signOf(value, signed) + digits, exponent: Number(power) };
  }
  let text: string;
  if (decimals !== undefined) text = size.toFixed(decimals);
  else if (significant !== undefined) text = fixedTo(size, significant);
  else text = trimmed(size.toFixed(6));
  // What rounds to nothing has no sign.
  const shown = Number(text) === 0 ? 0 : value;
  return { mantissa: signOf(shown, signed) + grouped(text), exponent: null };
}

/** "1 234.5", "−0.25", "3 × 10⁻¹⁴". */
export function formatNumber(value: number, options: NumberOptions = {}): string {
  const { mantissa, exponent } = numberParts(value, options);
  if (exponent === null) return mantissa;
  return `${mantissa}${NARROW}×${NARROW}10${raised(exponent)}`;
}

/** "0.381 PW"; degrees and nothing else follow without a space. */
export function formatQuantity(value: number, unit: string, options: NumberOptions = {}): string {
  const number = formatNumber(value, options);
  if (unit === '' || number === NO_VALUE) return number;
  return number + unitGap(unit) + unit;
}

/** The space that stands between a number and this unit. */
export function unitGap(unit: string): string {
  return unit.startsWith('°') ? '' : SPACE;
}

/** "20° N", "0°", "17.5° S". */
export function formatLatitude(degrees: number, decimals?: number): string {
  return compass(degrees, ['N', 'S'], decimals);
}

/** "30° E", "0°", "12.4° W"; degrees east as they come, no wrapping. */
export function formatLongitude(degrees: number, decimals?: number): string {
  return compass(degrees, ['E', 'W'], decimals);
}

/** "1.00 → 1.20 m", the unit once, at the end. */
export function formatChange(from: string, to: string, unit = ''): string {
  return `${from} → ${to}${unit === '' ? '' : unitGap(unit) + unit}`;
}

/** "day 1 240", "day 12.25". */
export function formatModelDay(day: number): string {
  return `day ${formatNumber(day, { decimals: Math.abs(day % 1) < 1e-9 ? 0 : 2 })}`;
}

/** "year 3.41": model years of 365 days since day 0. */
export function formatModelYear(day: number): string {
  return `year ${formatNumber(day / DAYS_PER_YEAR, { decimals: 2 })}`;
}

/** How far a run is: "year 3.41 of 10", or "day 24.5 of 90" when it is shorter than a year. */
export function formatModelTime(day: number, totalDays: number): string {
  if (totalDays < DAYS_PER_YEAR) return `day ${formatNumber(day, { decimals: 1 })} of ${formatNumber(totalDays)}`;
  const years = totalDays / DAYS_PER_YEAR;
  const whole = Math.abs(years - Math.round(years)) < 1e-9;
  return `${formatModelYear(day)} of ${formatNumber(years, { decimals: whole ? 0 : 2 })}`;
}

/** "10 years", "1 year", "90 days": the length of a run. */
export function formatModelLength(days: number): string {
  const years = days / DAYS_PER_YEAR;
  if (years >= 1 && Math.abs(years * 4 - Math.round(years * 4)) < 1e-9)
    return `${formatNumber(years)} ${years === 1 ? 'year' : 'years'}`;
  return `${formatNumber(days)} ${days === 1 ? 'day' : 'days'}`;
}

const MONTHS = ['Jan', 'Feb', 'Mar', 'Apr', 'May', 'Jun', 'Jul', 'Aug', 'Sep', 'Oct', 'Nov', 'Dec'];
const MONTH_STARTS = [0, 31, 59, 90, 120, 151, 181, 212, 243, 273, 304, 334];

/** Day of the model year as a date: 0 is "1 Jan". Any model day does; the year is dropped. */
export function formatSeasonDay(day: number): string {
  const ofYear = Math.floor((((day % DAYS_PER_YEAR) + DAYS_PER_YEAR) % DAYS_PER_YEAR) + 1e-9) % DAYS_PER_YEAR;
  const month = MONTH_STARTS.findLastIndex((start) => start <= ofYear);
  return `${ofYear - (MONTH_STARTS[month] ?? 0) + 1} ${MONTHS[month] ?? ''}`;
}

/** Wall-clock seconds: "45 s", "6 min 5 s", "2 h 5 min", "3 d 4 h". `parts: 1` rounds to the larger one. */
export function formatDuration(seconds: number, parts: 1 | 2 = 2): string {
  if (!Number.isFinite(seconds) || seconds < 0) return NO_VALUE;
  const units = [
    ['d', 86_400],
    ['h', 3600],
    ['min', 60],
    ['s', 1],
  ] as const;
  let first = units.findIndex(([, size]) => seconds >= size);
  if (first < 0) first = units.length - 1;
  const finest = parts === 1 ? first : Math.min(first + 1, units.length - 1);
  const step = units[finest]?.[1] ?? 1;
  let rest = Math.round(seconds / step) * step;
  // Rounding can lift it into the next unit: 59.7 s is 1 min.
  if (first > 0 && rest >= (units[first - 1]?.[1] ?? Infinity)) first -= 1;
  const out: string[] = [];
  for (const [name, size] of units.slice(first, first + parts)) {
    const count = Math.floor(rest / size);
    rest -= count * size;
    if (count > 0 || out.length === 0) out.push(`${count}${SPACE}${name}`);
  }
  return out.join(' ');
}

/** "18.4 GB", three significant digits, powers of 1000. */
export function formatBytes(bytes: number): string {
  if (!Number.isFinite(bytes) || bytes < 0) return NO_VALUE;
  const names = ['B', 'kB', 'MB', 'GB', 'TB', 'PB'];
  let power = bytes < 1 ? 0 : Math.min(Math.floor(Math.log10(bytes) / 3), names.length - 1);
  if (power < names.length - 1 && Number((bytes / 1000 ** power).toPrecision(3)) >= 1000) power += 1;
  const value = bytes / 1000 ** power;
  return `${power === 0 ? formatNumber(value, { decimals: 0 }) : fixedTo(value, 3)}${SPACE}${names[power] ?? ''}`;
}

/** Speed of the stepper: "90 million cell-steps/s". */
export function formatCellSteps(perSecond: number): string {
  if (!Number.isFinite(perSecond)) return NO_VALUE;
  const [value, word] =
    perSecond >= 1e9
      ? [perSecond / 1e9, ' billion']
      : perSecond >= 1e6
        ? [perSecond / 1e6, ' million']
        : [perSecond, ''];
  return `${word ? fixedTo(value, 2) : formatNumber(value, { decimals: 0 })}${word} cell-steps/s`;
}

/** A moment as a person says it: "09:12" today, "Friday 09:12" within six days, then "3 March 09:12", "3 March 2024". */
export function formatMoment(iso: string, now: Date = new Date()): string {
  const at = new Date(iso);
  if (Number.isNaN(at.getTime())) return NO_VALUE;
  const clock = formatClock(iso);
  const days = calendarDays(at, now);
  if (days === 0) return clock;
  if (days > 0 && days < 7) return `${weekday(at)} ${clock}`;
  const date = new Intl.DateTimeFormat('en-GB', { day: 'numeric', month: 'long' }).format(at);
  return at.getFullYear() === now.getFullYear() ? `${date} ${clock}` : `${date} ${at.getFullYear()}`;
}

/** The day alone: "today", "yesterday", "Thursday", "3 March". */
export function formatDay(iso: string, now: Date = new Date()): string {
  const at = new Date(iso);
  if (Number.isNaN(at.getTime())) return NO_VALUE;
  const days = calendarDays(at, now);
  if (days === 0) return 'today';
  if (days === 1) return 'yesterday';
  if (days > 0 && days < 7) return weekday(at);
  const year = at.getFullYear() === now.getFullYear() ? {} : ({ year: 'numeric' } as const);
  return new Intl.DateTimeFormat('en-GB', { day: 'numeric', month: 'long', ...year }).format(at);
}

/** "16:40". */
export function formatClock(iso: string): string {
  return new Intl.DateTimeFormat('en-GB', { hour: '2-digit', minute: '2-digit', hour12: false }).format(new Date(iso));
}

/** For tables that must name the second: "3 Mar 2026, 09:12:41". */
export function formatTimestamp(iso: string): string {
  const at = new Date(iso);
  if (Number.isNaN(at.getTime())) return NO_VALUE;
  const date = new Intl.DateTimeFormat('en-GB', { day: 'numeric', month: 'short', year: 'numeric' }).format(at);
  const time = new Intl.DateTimeFormat('en-GB', { timeStyle: 'medium', hour12: false }).format(at);
  return `${date}, ${time}`;
}

const WORDS = ['no', 'one', 'two', 'three', 'four', 'five', 'six', 'seven', 'eight', 'nine', 'ten', 'eleven', 'twelve'];

/** A count in a sentence: "three runs", "one run", "14 runs". */
export function formatCount(count: number, one: string, many = `${one}s`): string {
  return `${WORDS[count] ?? formatNumber(count)} ${count === 1 ? one : many}`;
}

/** First letter large, for the start of a sentence. */
export function sentenceStart(text: string): string {
  return text.charAt(0).toUpperCase() + text.slice(1);
}

function signOf(value: number, signed = false): string {
  if (value < 0) return MINUS;
  return signed && value > 0 ? '+' : '';
}

/** Thousands apart from 10 000 on the left of the point, and 1 240 as well: one rule for all. */
function grouped(text: string): string {
  const [whole = '', fraction] = text.split('.');
  const parted = whole.replace(/\B(?=(\d{3})+(?!\d))/g, NARROW);
  return fraction === undefined ? parted : `${parted}.${fraction}`;
}

function trimmed(text: string): string {
  return text.includes('.') ? text.replace(/\.?0+$/, '') : text;
}

function fixedTo(size: number, significant: number): string {
  if (size === 0) return '0';
  const digits = Math.floor(Math.log10(Number(size.toPrecision(significant)))) + 1;
  return size.toFixed(Math.max(0, significant - digits));
}

function raised(exponent: number): string {
  const digits = '⁰¹²³⁴⁵⁶⁷⁸⁹';
  const text = [...String(Math.abs(exponent))].map((digit) => digits.charAt(Number(digit))).join('');
  return exponent < 0 ? `⁻${text}` : text;
}

function compass(degrees: number, [positive, negative]: [string, string], decimals?: number): string {
  if (!Number.isFinite(degrees)) return NO_VALUE;
  const size = formatNumber(Math.abs(degrees), decimals === undefined ? {} : { decimals });
  const zero = Number(size) === 0;
  return zero ? '0°' : `${size}°${SPACE}${degrees > 0 ? positive : negative}`;
}

function weekday(at: Date): string {
  return new Intl.DateTimeFormat('en-GB', { weekday: 'long' }).format(at);
}

/** Whole calendar days from `at` to `now` in local time. */
function calendarDays(at: Date, now: Date): number {
  const midnight = (date: Date) => Date.UTC(date.getFullYear(), date.getMonth(), date.getDate());
  return Math.round((midnight(now) - midnight(at)) / 86_400_000);
}
