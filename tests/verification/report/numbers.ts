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

/** A number as the report shows it: true minus sign, no more than `digits` digits, powers of ten where it is small or large. */
export function shown(value: number | null, digits = 6): string {
  if (value === null) return 'not a number';
  if (value === 0) return '0';
  const size = Math.abs(value);
  if (size >= 1e-3 && size < 1e6) return String(Number(value.toPrecision(digits))).replace('-', '−');
  const [mantissa, exponent] = value.toExponential(digits - 1).split('e');
  const trimmed = String(Number(mantissa)).replace('-', '−');
  const power = String(Number(exponent)).replace(/./g, (sign) => SUPERSCRIPTS[sign]);
  return trimmed === '1' ? `10${power}` : `${trimmed} × 10${power}`;
}
