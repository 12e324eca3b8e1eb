/** Between thousands: narrow no-break space. */
const NARROW_SPACE = '\u202f';
const SUPERSCRIPTS: Record<string, string> = {
  '-': '⁻',
  '0': '⁰',
  '1': '¹',
  '2': '²',
  '3': '³',
  '4': '⁴',
  '5': '⁵',
  '6': '⁶',
  '7': '⁷',
  '8': '⁸',
  '9': '⁹',
};

/**
 * A number as a person reads it, to `digits` significant digits: true minus, narrow no-break spaces between thousands,
 * "2.3 × 10⁻¹¹" below 10⁻⁴ and from 10⁷. No trailing zeros.
 */
export function readable(value: number, digits = 3): string {
  if (!Number.isFinite(value)) return Number.isNaN(value) ? 'no number' : value > 0 ? 'infinite' : '−infinite';
  const rounded = Number(value.toPrecision(digits));
  return isScientific(rounded) ? scientific(rounded, 0) : grouped(rounded, 0);
}

/**
 * Two numbers for "from → to": enough digits that different values look different, and the same number of decimals
 * (`minDecimals` at least) in both.
 */
export function readablePair(a: number, b: number, minDecimals = 0): [string, string] {
  let digits = 6;
  while (digits < 17 && a !== b && Number(a.toPrecision(digits)) === Number(b.toPrecision(digits))) digits++;
  const values = [a, b].map((value) => Number(value.toPrecision(digits)));
  if (values.some(isScientific)) {
    const decimals = Math.max(...values.map((value) => mantissaDecimals(value)));
    return [scientific(values[0], decimals), scientific(values[1], decimals)];
  }
  const decimals = Math.max(minDecimals, ...values.map(decimalsOf));
  return [grouped(values[0], decimals), grouped(values[1], decimals)];
}

/** "12.5° N", "3° S", "0°". */
export function readableLatitude(degrees: number): string {
  if (degrees === 0) return '0°';
  return `${readable(Math.abs(degrees), 6)}° ${degrees > 0 ? 'N' : 'S'}`;
}

/** "40.5° E", "3° W", "0°". */
export function readableLongitude(degrees: number): string {
  if (degrees === 0) return '0°';
  return `${readable(Math.abs(degrees), 6)}° ${degrees > 0 ? 'E' : 'W'}`;
}

const MONTHS: readonly [string, number][] = [
  ['January', 31],
  ['February', 28],
  ['March', 31],
  ['April', 30],
  ['May', 31],
  ['June', 30],
  ['July', 31],
  ['August', 31],
  ['September', 30],
  ['October', 31],
  ['November', 30],
  ['December', 31],
];

/** The date of a day of the 365-day model year, day 0 = 1 January: 196 → "16 July". */
export function readableDate(dayOfYear: number): string {
  let day = Math.floor(((dayOfYear % 365) + 365) % 365);
  for (const [month, length] of MONTHS) {
    if (day < length) return `${day + 1} ${month}`;
    day -= length;
  }
  return '31 December';
}

/** Bytes with a decimal prefix: "1.3 GB". */
export function readableBytes(bytes: number): string {
  const units = ['B', 'kB', 'MB', 'GB', 'TB', 'PB'];
  let value = bytes;
  let k = 0;
  while (value >= 1000 && k < units.length - 1) {
    value /= 1000;
    k++;
  }
  return `${readable(value, 3)} ${units[k]}`;
}

function isScientific(value: number): boolean {
  const size = Math.abs(value);
  return size !== 0 && (size < 1e-4 || size >= 1e7);
}

/** Decimals of the shortest text that reads back as the same number. */
function decimalsOf(value: number): number {
  const text = String(value);
  const point = text.indexOf('.');
  return point < 0 ? 0 : text.length - point - 1;
}

function mantissaDecimals(value: number): number {
  if (value === 0) return 0;
  const [mantissa] = value.toExponential().split('e');
  return decimalsOf(Number(mantissa));
}

function grouped(value: number, decimals: number): string {
  // Padded as text: toFixed would show digits beyond the shortest text of the number.
  const [whole, digits = ''] = String(Math.abs(value)).split('.');
  const fraction = decimals > 0 || digits ? digits.padEnd(decimals, '0') : undefined;
  const spaced = whole.replace(/\B(?=(\d{3})+$)/g, NARROW_SPACE);
  return `${value < 0 ? '−' : ''}${spaced}${fraction === undefined ? '' : `.${fraction}`}`;
}

function scientific(value: number, decimals: number): string {
  if (value === 0) return '0';
  const [mantissa, exponent] = Math.abs(value)
    .toExponential(Math.max(decimals, mantissaDecimals(Math.abs(value))))
    .split('e');
  const power = String(Number(exponent))
    .split('')
    .map((sign) => SUPERSCRIPTS[sign])
    .join('');
  return `${value < 0 ? '−' : ''}${mantissa} × 10${power}`;
}
