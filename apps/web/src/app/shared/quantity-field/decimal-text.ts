/** What stood in a field: nothing, a number, or something that is no number. */
export type Reading = { kind: 'empty' } | { kind: 'number'; value: number } | { kind: 'unreadable'; text: string };

const MINUS = /[\u2212\u2010-\u2015]/g;
const SPACES = /[\s\u00a0\u2009\u202f]/g;
const SUPERSCRIPTS = '⁰¹²³⁴⁵⁶⁷⁸⁹';
const NUMBER = /^([+-]?)(\d*)(?:\.(\d*))?(?:e([+-]?\d+))?$/i;

/** Makes a typed number plain: true minus, decimal comma, spaces between thousands and "× 10⁻⁸" become what Number() reads. */
function plain(text: string): string {
  const simple = text
    .replace(MINUS, '-')
    .replace(/⁻/g, '-')
    .replace(/[⁰¹²³⁴⁵⁶⁷⁸⁹]/g, (digit) => String(SUPERSCRIPTS.indexOf(digit)))
    .replace(SPACES, '')
    .replace(/[×*]10\^?(?=[+-]?\d)/, 'e');
  return simple.includes('.') ? simple : simple.replace(/,/, '.');
}

/** Reads a number as people type it. A decimal comma is read as a point; a comma beside a point is not a number. */
export function readDecimal(text: string): Reading {
  const trimmed = text.trim();
  if (trimmed === '') return { kind: 'empty' };
  const simple = plain(trimmed);
  const parts = NUMBER.exec(simple);
  if (!parts || ((parts[2] ?? '') === '' && (parts[3] ?? '') === '')) return { kind: 'unreadable', text: trimmed };
  const value = Number(simple);
  return Number.isFinite(value) ? { kind: 'number', value } : { kind: 'unreadable', text: trimmed };
}

/**
 * A number as it stands in a field: true minus, powers of ten as "1e−8" below 10⁻⁴ and from 10¹⁵, narrow no-break
 * spaces between thousands from 10 000; '' for null and for what is not finite. Nothing is rounded away.
 */
export function writeDecimal(value: number | null | undefined): string {
  if (value === null || value === undefined || !Number.isFinite(value)) return '';
  const size = Math.abs(value);
  if (size !== 0 && (size < 1e-4 || size >= 1e15)) return dress(value.toExponential().replace('e+', 'e'));
  return dress(String(value));
}

function dress(simple: string): string {
  const [mantissa = '', exponent] = simple.split('e');
  const [whole = '', fraction] = mantissa.split('.');
  const digits = whole.replace('-', '');
  const grouped = digits.length > 4 ? digits.replace(/\B(?=(\d{3})+$)/g, '\u202f') : digits;
  const text =
    (whole.startsWith('-') ? '-' : '') +
    grouped +
    (fraction === undefined ? '' : `.${fraction}`) +
    (exponent === undefined ? '' : `e${exponent}`);
  return text.replace(/-/g, '\u2212');
}

/** A number without a power of ten, as attributes want it ("0.00000001"); null for what is no number. */
export function plainDecimal(value: number | null | undefined): string | null {
  if (value === null || value === undefined || !Number.isFinite(value)) return null;
  return value.toLocaleString('en-US', { useGrouping: false, maximumFractionDigits: 20 });
}

export interface StepRule {
  min?: number;
  max?: number;
  /** Only whole multiples of this: it is then the step. */
  multipleOf?: number;
}

/**
 * The text after `count` steps of the last digit that stands in it ("0.20" becomes "0.21", "1e−8" becomes "2e−8").
 * The digits behind the point stay. A step does not leave the range, but returns to it from outside.
 * Null when the text is no number.
 */
export function stepDecimal(text: string, count: number, rule: StepRule = {}): string | null {
  const reading = readDecimal(text);
  if (reading.kind !== 'number') return null;
  const parts = NUMBER.exec(plain(text.trim()));
  const fraction = parts?.[3] ?? '';
  const exponent = parts?.[4];
  const power = exponent === undefined ? 0 : Number(exponent);
  const show = (value: number) =>
    dress((value / 10 ** power).toFixed(fraction.length) + (exponent === undefined ? '' : `e${power}`));
  if (rule.multipleOf !== undefined) {
    const { multipleOf } = rule;
    const place = count > 0 ? Math.floor(reading.value / multipleOf) : Math.ceil(reading.value / multipleOf);
    return writeDecimal(within(reading.value, (place + count) * multipleOf, rule));
  }
  const unit = 10 ** (power - fraction.length);
  const stepped = (Math.round(reading.value / unit) + count) * unit;
  const kept = within(reading.value, stepped, rule);
  return kept === stepped ? show(stepped) : writeDecimal(kept);
}

/** A step stops at the bound that it would cross; from outside it may come nearer. */
function within(from: number, to: number, { min = -Infinity, max = Infinity }: StepRule): number {
  if (to > max && to > from) return Math.max(from, max);
  if (to < min && to < from) return Math.min(from, min);
  return to;
}
