const SPECIAL: Readonly<Record<string, string>> = {
  '': '1',
  // In UDUNITS “Sv” is the sievert and “Gt” leans on the tonne: both are written out.
  Sv: '1e6 m3 s-1',
  Gt: '1e12 kg',
  '°': 'degree',
  d: 'day',
  // A number of things has no unit.
  cells: '1',
};
const DIGITS: Readonly<Record<string, string>> = { '¹': '1', '²': '2', '³': '3', '⁴': '4', '⁵': '5', '⁶': '6' };

/**
 * A unit as the product shows it ("m²/s", "1/(m s)", "Sv") in the notation that CF asks for ("m2 s-1"). Throws
 * RangeError for a unit of another form, so that a new quantity cannot leave with a unit that nobody can parse.
 */
export function cfUnit(unit: string): string {
  const special = SPECIAL[unit];
  if (special !== undefined) return special;
  const [numerator = '', denominator = '', ...rest] = unit
    .replace(/[¹²³⁴⁵⁶]/g, (digit) => DIGITS[digit])
    .split('/')
    .map((part) => part.replace(/^\((.*)\)$/, '$1'));
  const factors = (part: string) => part.split(/[\s·]+/).filter((factor) => factor !== '' && factor !== '1');
  const inverse = factors(denominator).map((factor) => factor.replace(/^([A-Za-zµ]+)(\d*)$/, '$1-$2'));
  const written = [...factors(numerator), ...inverse.map((factor) => (factor.endsWith('-') ? `${factor}1` : factor))];
  if (rest.length > 0 || written.length === 0 || !written.every((factor) => /^[A-Za-zµ]+(-?\d+)?$/.test(factor)))
    throw new RangeError(`There is no CF notation for the unit “${unit}” yet; add it to cf-units.ts.`);
  return written.join(' ');
}
