import type { Check, Preflight } from '@halfdeep/ocean';
import { formatBytes, formatCount, formatNumber, formatQuantity, NARROW, SPACE } from '../../core/format';

const COUNTED = new Set(['sections', 'moorings']);

/** Beside a pass: "11.0 of 44.0 km" where the limit is a most, "2.50" where it is a least; long units are left to the reason. */
export function checkNumbers({ value, limit, unit, ratio }: Check): string {
  if (!Number.isFinite(value) || !Number.isFinite(limit)) return '';
  const short = /^\S{0,4}$/.test(unit) ? unit : '';
  if (value === 0 && limit === 0) return '';
  if (unit === 'GB') return `${formatBytes(value * 1e9)} of ${formatBytes(limit * 1e9)}`;
  // Counts are told whole.
  const counts = Number.isInteger(value) && Number.isInteger(limit) && (limit >= 1000 || COUNTED.has(unit));
  const options = counts ? {} : { significant: 3 };
  const asksLeast = Math.abs(ratio * value - limit) < Math.abs(ratio * limit - value);
  if (asksLeast) return formatQuantity(value, short, options);
  return `${formatNumber(value, options)} of ${formatQuantity(limit, short, options)}`;
}

/** The whole in a word: "one refusal, two cautions", "every check passes". */
export function verdictWords({ checks }: Pick<Preflight, 'checks'>, unread = 0): string {
  const count = (verdict: Check['verdict']) => checks.filter((check) => check.verdict === verdict).length;
  const parts = [
    count('refuse') + unread > 0 ? formatCount(count('refuse') + unread, 'refusal') : '',
    count('caution') > 0 ? formatCount(count('caution'), 'caution') : '',
  ].filter(Boolean);
  return parts.length > 0 ? parts.join(', ') : 'every check passes';
}

/** A sentence whose numbers are not parted from their units at the end of a line. */
export function unbroken(text: string): string {
  return text.replace(/(?<=\d) (?=(?:km|m|s|d|m²\/s|1\/s|N\/m²|GB|MB|kB)(?![\p{L}\d]))/gu, SPACE);
}

/** A formatted quantity in its number and its unit, so that the unit can be smaller. */
export function splitUnit(text: string): { number: string; unit: string } {
  const at = Math.max(text.lastIndexOf(NARROW), text.lastIndexOf(SPACE));
  return at < 0 ? { number: text, unit: '' } : { number: text.slice(0, at), unit: text.slice(at + 1) };
}
