import { readDecimal, writeDecimal } from '../../shared/quantity-field/decimal-text';

export type PolygonReading = { points: [number, number][] } | { problem: string };

/**
 * Reads a ring of points, one a line: longitude, then latitude, in degrees, apart by spaces, a semicolon, a tab or a
 * comma. Empty lines count for nothing. The problem names the line and what stood there.
 */
export function readPolygon(text: string): PolygonReading {
  const points: [number, number][] = [];
  for (const [k, line] of text.split(/\r?\n/).entries()) {
    if (line.trim() === '') continue;
    const numbers = splitLine(line.trim()).map(readDecimal);
    const values = numbers.map((reading) => (reading.kind === 'number' ? reading.value : NaN));
    const [longitude, latitude] = values;
    if (values.length !== 2 || longitude === undefined || latitude === undefined || values.some(Number.isNaN))
      return { problem: `Line ${k + 1} reads “${line.trim()}”. Write a longitude and a latitude, like 40.5 −7.25.` };
    points.push([longitude, latitude]);
  }
  return { points };
}

/** Commas part the numbers only where nothing else does; beside another sign they are decimal commas. */
function splitLine(line: string): string[] {
  for (const sign of [/\s*;\s*/, /\s*,\s+|\t+/, /\s+/]) {
    const parts = line.split(sign).filter((part) => part !== '');
    if (parts.length > 1) return parts;
  }
  return line.split(',');
}

/** One point a line, as `readPolygon` reads it. */
export function writePolygon(points: readonly (readonly [number, number])[]): string {
  return points.map(([longitude, latitude]) => `${writeDecimal(longitude)} ${writeDecimal(latitude)}`).join('\n');
}
