import type { Check, Preflight } from '@halfdeep/ocean';
import { formatCount, formatNumber, formatQuantity, NARROW } from '../../core/format';

/** "11 of 44 km" where the limit is a most, "2.5, asks 2" where it is a least. */
export function checkNumbers({ value, limit, unit, ratio }: Check): string {
  const asksLeast = Math.abs(ratio * value - limit) < Math.abs(ratio * limit - value);
  const options = { significant: 3 };
  if (!Number.isFinite(value) || !Number.isFinite(limit)) return '';
  if (asksLeast) return `${formatNumber(value, options)}, asks ${formatQuantity(limit, unit, options)}`;
  return `${formatNumber(value, options)} of ${formatQuantity(limit, unit, options)}`;
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

/** A formatted quantity in its number and its unit, so that the unit can be smaller. */
export function splitUnit(text: string): { number: string; unit: string } {
  const at = text.lastIndexOf(NARROW);
  return at < 0 ? { number: text, unit: '' } : { number: text.slice(0, at), unit: text.slice(at + 1) };
}
