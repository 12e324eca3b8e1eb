import { CAUTION, type SliceHead } from '@halfdeep/contracts';

/** A text cell: quoted when it must be, and never read as a formula by a spreadsheet. */
export function csvText(text: string): string {
  const safe = /^[=+\-@\t\r]/.test(text) ? `'${text}` : text;
  return /[",\r\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe;
}

/** A number as it is, or an empty cell for land and undefined values; float32 values in nine digits. */
function csvNumber(value: number, single: boolean): string {
  if (!Number.isFinite(value)) return '';
  return single ? String(Number(value.toPrecision(9))) : String(value);
}

/** A comment line: one line, so that nothing a person typed starts a row of its own. */
function comment(text: string): string {
  return `# ${text.replaceAll(/[\r\n]+/g, ' ')}`;
}

/**
 * A slice as comma-separated text: comment lines with what it is and the caution, a header row, then rows. A map or a
 * space-time slice has one row a point (first axis, second axis, value); series have one row a record.
 */
export function* csvRows(head: SliceHead, data: Float32Array | Float64Array, about: string[]): Generator<string> {
  for (const line of [...about, CAUTION]) yield comment(line);
  const single = head.dtype === 'float32';
  const [first, second] = head.axes;
  const axisTitle = (axis: { name: string; unit: string }) => csvText(`${axis.name} (${axis.unit})`);
  if (head.columns) {
    const titles = head.columns.map((column) => csvText(`${column.label} (${column.unit}, ${column.kind})`));
    yield [axisTitle(first), ...titles].join(',');
    const width = head.columns.length;
    for (let r = 0; r < head.shape[0]; r++) {
      const cells = [String(first.values[r])];
      for (let c = 0; c < width; c++) cells.push(csvNumber(data[r * width + c], single));
      yield cells.join(',');
    }
    return;
  }
  yield [axisTitle(first), axisTitle(second), csvText(`${head.name} (${head.unit ?? ''})`)].join(',');
  const width = head.shape[1];
  for (let r = 0; r < head.shape[0]; r++)
    for (let c = 0; c < width; c++)
      yield `${first.values[r]},${second.values[c]},${csvNumber(data[r * width + c], single)}`;
}
