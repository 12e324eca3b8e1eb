/** Stands on everything that leaves the product. */
export const CAUTION =
  'Caution: a one-and-a-half-layer experiment is an idealisation. It is not a forecast, and not to be used for ' +
  'navigation, safety at sea, fisheries limits, or engineering design; for those, use the services of the responsible ' +
  'national agency and qualified people.';

/** Numbers behind a plate: what a data file and the table on the page show. */
export interface PlotTable {
  columns: string[];
  /** Row k; numbers in the unit that the column names, NaN where there is no value. */
  row: (k: number) => (number | string)[];
  rows: number;
  /** What is drawn, one line each: run, variable, unit, day. */
  notes: string[];
}

/**
 * One cell. Text that a spreadsheet would take for a formula (=, +, −, @, tab, return at its beginning) gets an apostrophe
 * in front; text with commas, quotes or line ends is quoted. Numbers keep full single precision; NaN is empty.
 */
export function csvCell(value: number | string): string {
  if (typeof value === 'number') return Number.isFinite(value) ? String(Number(value.toPrecision(9))) : '';
  const safe = /^[=+\-@\t\r]/.test(value) ? `'${value}` : value;
  return /[",\r\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe;
}

/** The whole file: notes and the caution as comment lines, a head, then the rows. Lines end with CRLF (RFC 4180). */
export function csvFile(table: PlotTable): string {
  const comment = (text: string) => `# ${text.replaceAll(/[\r\n]+/g, ' ')}`;
  const lines = [...table.notes, CAUTION].map(comment);
  lines.push(table.columns.map(csvCell).join(','));
  for (let k = 0; k < table.rows; k++) lines.push(table.row(k).map(csvCell).join(','));
  return `${lines.join('\r\n')}\r\n`;
}
