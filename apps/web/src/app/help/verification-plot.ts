import type { VerificationPlate } from '@halfdeep/contracts';

/** Where a small figure of the report is drawn, px. */
export const PLOT = { width: 340, height: 220, left: 56, right: 12, top: 12, bottom: 40 } as const;

/** A value and where it lies, px. */
export interface Tick {
  value: number;
  at: number;
}

export interface DrawnSeries {
  name: string;
  role: 'found' | 'expected' | 'slope';
  /** SVG path through the points. */
  path: string;
  /** Marks where there are few points. */
  marks: { x: number; y: number }[];
}

export interface DrawnPlate {
  xTicks: Tick[];
  yTicks: Tick[];
  series: DrawnSeries[];
}

const FEW_POINTS = 12;

/** Paths and ticks of a plate; points that a logarithmic axis cannot show, or that are not finite, are left out. */
export function drawPlate({ x, y, series }: VerificationPlate): DrawnPlate {
  const shown = series.map(({ name, role, points }) => ({
    name,
    role,
    points: points.filter(([a, b]) => fits(a, x.log) && fits(b, y.log)),
  }));
  const all = shown.flatMap(({ points }) => points);
  const xScale = scaleOf(
    all.map(([a]) => a),
    x.log,
    PLOT.left,
    PLOT.width - PLOT.right,
  );
  const yScale = scaleOf(
    all.map(([, b]) => b),
    y.log,
    PLOT.height - PLOT.bottom,
    PLOT.top,
  );
  return {
    xTicks: xScale.ticks,
    yTicks: yScale.ticks,
    series: shown.map(({ name, role, points }) => {
      const placed = points.map(([a, b]) => ({ x: xScale.at(a), y: yScale.at(b) }));
      const path = placed
        .map((place, k) => `${k === 0 ? 'M' : 'L'}${place.x.toFixed(1)} ${place.y.toFixed(1)}`)
        .join('');
      return { name, role, path, marks: role !== 'slope' && placed.length <= FEW_POINTS ? placed : [] };
    }),
  };
}

const fits = (value: number, log: boolean) => Number.isFinite(value) && (!log || value > 0);

interface Scale {
  at: (value: number) => number;
  ticks: Tick[];
}

/** A scale over the values with a little room, and its ticks: whole powers of ten, or round steps. */
function scaleOf(values: readonly number[], log: boolean, from: number, to: number): Scale {
  const turned = values.map((value) => (log ? Math.log10(value) : value));
  let low = turned.reduce((a, b) => Math.min(a, b), Infinity);
  let high = turned.reduce((a, b) => Math.max(a, b), -Infinity);
  if (!(low <= high)) [low, high] = [0, 1];
  const room = (high - low) * 0.06 || Math.max(Math.abs(low) * 0.06, log ? 0.5 : 1e-9);
  [low, high] = [low - room, high + room];
  const at = (value: number) => from + (((log ? Math.log10(value) : value) - low) / (high - low)) * (to - from);
  return { at, ticks: (log ? powers(low, high) : rounds(low, high)).map((value) => ({ value, at: at(value) })) };
}

/** Powers of ten in the range; where there are fewer than two, 1, 2 and 5 times them. */
function powers(low: number, high: number): number[] {
  const decades = Array.from({ length: Math.floor(high) - Math.floor(low) + 1 }, (_, k) => Math.floor(low) + k);
  const within = (value: number) => Math.log10(value) >= low && Math.log10(value) <= high;
  const whole = decades.map((power) => 10 ** power).filter(within);
  if (whole.length >= 2) return whole.filter((_, k) => k % Math.ceil(whole.length / 6) === 0);
  return decades
    .flatMap((power) => [1, 2, 5].map((factor) => Number((factor * 10 ** power).toPrecision(3))))
    .filter(within);
}

function rounds(low: number, high: number): number[] {
  const raw = (high - low) / 4;
  const decade = 10 ** Math.floor(Math.log10(raw));
  const step = decade * ([1, 2, 5].find((factor) => factor * decade >= raw) ?? 10);
  const first = Math.ceil(low / step - 1e-9);
  const last = Math.floor(high / step + 1e-9);
  return Array.from(
    { length: Math.max(0, last - first + 1) },
    (_, k) => Number(((first + k) * step).toPrecision(12)) + 0,
  );
}
