import type { VerificationPlate } from '@halfdeep/contracts';
import { escapeHtml } from './html';
import { shown } from './numbers';

const WIDTH = 460;
const HEIGHT = 280;
const LEFT = 64;
const RIGHT = 96;
const TOP = 16;
const BOTTOM = 48;
/** Width of the graduated frame. */
const FRAME = 4;
const DASHES = ['', '6 3', '2 3', '8 3 2 3'];

interface Axis {
  at: (value: number) => number;
  ticks: number[];
}

/** A plate as inline SVG: graduated frame, curves named at their ends; found as marks, expected as a line. */
export function plateSvg(plate: VerificationPlate): string {
  const points = plate.series.flatMap((series) => series.points);
  const x = axis(
    points.map(([value]) => value),
    plate.x.log,
    [LEFT, WIDTH - RIGHT],
  );
  const y = axis(
    points.map(([, value]) => value),
    plate.y.log,
    [HEIGHT - BOTTOM, TOP],
  );
  const parts = [frame(x, y)];
  for (const tick of x.ticks)
    parts.push(text(x.at(tick), HEIGHT - BOTTOM + FRAME + 15, tickText(tick, plate.x.log), 'middle'));
  for (const tick of y.ticks) parts.push(text(LEFT - FRAME - 5, y.at(tick) + 4, tickText(tick, plate.y.log), 'end'));
  parts.push(text((LEFT + WIDTH - RIGHT) / 2, HEIGHT - 8, plate.x.label, 'middle', 'name'));
  parts.push(text(6, TOP - 4, plate.y.label, 'start', 'name'));
  const names: { y: number; label: string; className: string }[] = [];
  plate.series.forEach((series, k) => {
    const className = `s${(k % 5) + 1}`;
    const line = series.points.map(([px, py]) => `${fixed(x.at(px))},${fixed(y.at(py))}`);
    const sparse = series.points.length <= 12;
    if (series.role !== 'found' || sparse || series.points.length > 40)
      parts.push(
        `<polyline class="${className}" points="${line.join(' ')}" stroke-dasharray="${series.role === 'slope' ? '1 4' : DASHES[k % DASHES.length]}"/>`,
      );
    if (series.role === 'found' && series.points.length <= 40)
      for (const [px, py] of series.points)
        parts.push(`<circle class="${className}" cx="${fixed(x.at(px))}" cy="${fixed(y.at(py))}" r="3"/>`);
    const [, lastY] = series.points.at(-1) ?? [0, 0];
    names.push({ y: y.at(lastY), label: series.name, className });
  });
  // Names stand at the ends of their curves, pushed apart to a line each.
  names.sort((a, b) => a.y - b.y);
  names.forEach((name, k) => {
    if (k > 0) name.y = Math.max(name.y, names[k - 1].y + 13);
  });
  const beyond = Math.max(0, (names.at(-1)?.y ?? 0) - (HEIGHT - BOTTOM));
  for (const { y: at, label, className } of names)
    parts.push(text(WIDTH - RIGHT + FRAME + 6, at - beyond + 4, label, 'start', `end ${className}`));
  return `<svg viewBox="0 0 ${WIDTH} ${HEIGHT}" role="img" aria-label="${escapeHtml(plate.caption)}">${parts.join('')}</svg>`;
}

function axis(values: readonly number[], log: boolean, [from, to]: [number, number]): Axis {
  const scale = log ? Math.log10 : (value: number) => value;
  let [least, most] = [Math.min(...values.map(scale)), Math.max(...values.map(scale))];
  if (!(most > least)) [least, most] = [least - 0.5, most + 0.5];
  const margin = 0.05 * (most - least);
  [least, most] = [least - margin, most + margin];
  const at = (value: number) => from + ((scale(value) - least) / (most - least)) * (to - from);
  return { at, ticks: log ? logTicks(least, most) : linearTicks(least, most) };
}

function linearTicks(least: number, most: number): number[] {
  const raw = (most - least) / 5;
  const power = 10 ** Math.floor(Math.log10(raw));
  const step = [1, 2, 5, 10].map((factor) => factor * power).find((size) => size >= raw) ?? raw;
  const ticks: number[] = [];
  for (let k = Math.ceil(least / step); k * step <= most; k++) ticks.push(k * step);
  return ticks;
}

function logTicks(least: number, most: number): number[] {
  const decades = most - least;
  const factors = decades > 3 ? [1] : decades > 1.2 ? [1, 3] : [1, 1.5, 2, 3, 5, 7];
  const ticks: number[] = [];
  for (let power = Math.floor(least); power <= most; power++)
    for (const factor of factors) {
      const value = factor * 10 ** power;
      const place = Math.log10(value);
      if (place >= least && place <= most) ticks.push(value);
    }
  const thin = Math.ceil(ticks.length / 7);
  return ticks.filter((_tick, k) => k % thin === 0);
}

/** Two hairlines apart by FRAME; stretches between ticks inked in turn. */
function frame(x: Axis, y: Axis): string {
  const [left, right, top, bottom] = [LEFT, WIDTH - RIGHT, TOP, HEIGHT - BOTTOM];
  const parts = [
    `<rect class="hair" x="${left}" y="${top}" width="${right - left}" height="${bottom - top}"/>`,
    `<rect class="hair" x="${left - FRAME}" y="${top - FRAME}" width="${right - left + 2 * FRAME}" height="${bottom - top + 2 * FRAME}"/>`,
  ];
  const inked = (ends: number[]) => ends.slice(1).flatMap((end, k) => (k % 2 === 0 ? [[ends[k], end]] : []));
  for (const [a, b] of inked([left, ...x.ticks.map(x.at), right]))
    for (const edge of [top - FRAME, bottom])
      parts.push(`<rect class="ink" x="${fixed(a)}" y="${edge}" width="${fixed(b - a)}" height="${FRAME}"/>`);
  for (const [a, b] of inked([bottom, ...y.ticks.map(y.at), top]))
    for (const edge of [left - FRAME, right])
      parts.push(`<rect class="ink" x="${edge}" y="${fixed(b)}" width="${FRAME}" height="${fixed(a - b)}"/>`);
  return parts.join('');
}

function text(x: number, y: number, content: string, anchor: string, className = ''): string {
  return `<text x="${fixed(x)}" y="${fixed(y)}" text-anchor="${anchor}" class="${className}">${escapeHtml(content)}</text>`;
}

function tickText(value: number, log: boolean): string {
  return log ? shown(value, 2) : shown(Number(value.toPrecision(10)), 4);
}

function fixed(value: number): string {
  return Number.isFinite(value) ? String(Number(value.toFixed(1))) : '0';
}
