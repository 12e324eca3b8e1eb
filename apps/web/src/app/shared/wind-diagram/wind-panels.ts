import { formatNumber } from '../../core/format';
import { traceIsoline } from '../plate/isolines';
import { niceCeiling } from '../plate/limits';

/** A field of latitude and season as it is drawn: values [latitude][day], shown values are stored ones times a factor. */
export interface WindPanel {
  title: string;
  unit: string;
  values: Float32Array;
  /** Ends of the diverging scale, ± this in stored units. */
  limit: number;
  /** `limit` in the shown unit, as text. */
  limitText: string;
}

const RAISED = '⁰¹²³⁴⁵⁶⁷⁸⁹';
const raised = (power: number) =>
  (power < 0 ? '⁻' : '') + [...String(Math.abs(power))].map((digit) => RAISED.charAt(Number(digit))).join('');

/** Largest absolute value that is a number; 0 when there is none. */
export function largest(values: ArrayLike<number>): number {
  let found = 0;
  for (let k = 0; k < values.length; k++) {
    const size = Math.abs(values[k] ?? NaN);
    if (size > found) found = size;
  }
  return found;
}

/** A panel in its own unit: `factor` turns stored values into shown ones. */
export function panelOf(title: string, unit: string, values: Float32Array, factor = 1): WindPanel {
  const shown = niceCeiling(largest(values) * factor);
  return { title, unit, values, limit: shown / factor, limitText: formatNumber(shown, { significant: 2 }) };
}

/** A panel whose unit carries the power of ten of its values: "10⁻⁸ N/m³". */
export function poweredPanelOf(title: string, unit: string, values: Float32Array): WindPanel {
  const most = largest(values);
  const power = most > 0 ? Math.floor(Math.log10(most)) : 0;
  return panelOf(title, power === 0 ? unit : `10${raised(power)} ${unit}`, values, 10 ** -power);
}

/** RGBA of a field, north at the top, through a table of 256 colours; NaN is left transparent. */
export function paintField(
  panel: Pick<WindPanel, 'values' | 'limit'>,
  rows: number,
  days: number,
  table: ArrayLike<number>,
): Uint8ClampedArray<ArrayBuffer> {
  const pixels = new Uint8ClampedArray(rows * days * 4);
  for (let j = 0; j < rows; j++)
    for (let k = 0; k < days; k++) {
      const value = panel.values[(rows - 1 - j) * days + k] ?? NaN;
      if (Number.isNaN(value)) continue;
      const stop = Math.round(255 * Math.min(1, Math.max(0, 0.5 + value / (2 * panel.limit))));
      const at = 4 * (j * days + k);
      for (let c = 0; c < 3; c++) pixels[at + c] = table[3 * stop + c] ?? 0;
      pixels[at + 3] = 255;
    }
  return pixels;
}

/** SVG path of an isoline in the px of a plot of `width` by `height`; days run from 0 to 365, rows are centres
 * from south to north. */
export function isolinePath(
  panel: WindPanel,
  axes: { day: Float64Array; rows: number },
  level: number,
  width: number,
  height: number,
): string {
  const days = axes.day.length;
  const x = Float64Array.from(axes.day, (day) => (day / 365) * width);
  const y = Float64Array.from({ length: axes.rows }, (_, j) => height * (1 - (j + 0.5) / axes.rows));
  const rows = Array.from({ length: axes.rows }, (_, j) => panel.values.subarray(j * days, (j + 1) * days));
  let path = '';
  traceIsoline({ x, y, rows }, level, (x0, y0, x1, y1) => {
    path += `M${x0.toFixed(1)} ${y0.toFixed(1)}L${x1.toFixed(1)} ${y1.toFixed(1)}`;
  });
  return path;
}

export interface StressArrow {
  x: number;
  y: number;
  dx: number;
  dy: number;
}

/** Arrows of the stress, `longest` px for the largest one, on a raster of about `apart` px; none where the wind is weak. */
export function stressArrows(
  stress: { taux: ArrayLike<number>; tauy: ArrayLike<number> },
  rows: number,
  days: number,
  width: number,
  height: number,
  { apart = 34, longest = 18 } = {},
): StressArrow[] {
  const size = (cell: number) => Math.hypot(stress.taux[cell] ?? 0, stress.tauy[cell] ?? 0);
  let most = 0;
  for (let cell = 0; cell < rows * days; cell++) most = Math.max(most, size(cell));
  if (most === 0) return [];
  const [nx, ny] = [Math.max(1, Math.floor(width / apart)), Math.max(1, Math.floor(height / (apart * 0.75)))];
  const arrows: StressArrow[] = [];
  for (let row = 0; row < ny; row++)
    for (let column = 0; column < nx; column++) {
      const [fx, fy] = [(column + 0.5) / nx, (row + 0.5) / ny];
      const j = Math.min(rows - 1, Math.floor((1 - fy) * rows));
      const k = Math.min(days - 1, Math.floor(fx * days));
      const cell = j * days + k;
      if (size(cell) < 0.08 * most) continue;
      const scale = longest / most;
      arrows.push({
        x: fx * width,
        y: fy * height,
        dx: (stress.taux[cell] ?? 0) * scale,
        dy: -(stress.tauy[cell] ?? 0) * scale,
      });
    }
  return arrows;
}

/** SVG path of an arrow centred on its place, with a head of a quarter of its length. */
export function arrowPath({ x, y, dx, dy }: StressArrow): string {
  const [x0, y0, x1, y1] = [x - dx / 2, y - dy / 2, x + dx / 2, y + dy / 2];
  const length = Math.hypot(dx, dy);
  const head = Math.min(4, Math.max(2, length / 4)) / (length || 1);
  const wing = (turn: number) =>
    `${(x1 - head * (dx - turn * dy * 0.7)).toFixed(1)} ${(y1 - head * (dy + turn * dx * 0.7)).toFixed(1)}`;
  return `M${x0.toFixed(1)} ${y0.toFixed(1)}L${x1.toFixed(1)} ${y1.toFixed(1)}M${wing(1)}L${x1.toFixed(1)} ${y1.toFixed(1)}L${wing(-1)}`;
}
