import { formatQuantity } from '../../core/format';

/** Ends of a colour scale in stored units. A diverging scale is symmetric, so that zero is its middle stop. */
export interface ColourLimits {
  min: number;
  max: number;
}

/** Half of each and a quarter of each are numbers that people read isolines by. */
const NICE = [1, 1.2, 1.6, 2, 2.4, 3.2, 4, 6, 8, 10];

/** The least of 1, 1.2, 1.6, 2, 2.4, 3.2, 4, 6, 8 × 10^k that is not below `value`; 1 when value is not above 0. */
export function niceCeiling(value: number): number {
  if (!(value > 0) || !Number.isFinite(value)) return 1;
  const decade = 10 ** Math.floor(Math.log10(value));
  // A value that is nice already must stay: division leaves a rounding error behind.
  const factor = NICE.find((nice) => nice * (1 + 1e-9) >= value / decade) ?? 10;
  return factor * decade;
}

/** Finite extremes of what `rows` hold, skipping all but every `stride`-th value; NaN when there is none. */
export function extremes(rows: Iterable<ArrayLike<number>>, stride = 1): { min: number; max: number } {
  let min = Infinity;
  let max = -Infinity;
  for (const row of rows)
    for (let k = 0; k < row.length; k += stride) {
      const value = row[k] ?? NaN;
      if (value < min && value > -Infinity) min = value;
      if (value > max && value < Infinity) max = value;
    }
  return min <= max ? { min, max } : { min: NaN, max: NaN };
}

/**
 * What a colour scale should span: 99.5 % of the values on each side, but never less than half of the extreme, so that a
 * jet of a few cells along a wall does not turn the rest of the basin grey. Looks at no more than some 20 000 values.
 */
export function typicalSpan(rows: readonly ArrayLike<number>[]): { min: number; max: number } {
  const whole = extremes(rows);
  if (Number.isNaN(whole.min)) return whole;
  const total = rows.reduce((sum, row) => sum + row.length, 0);
  // A step that is prime to most row lengths, so that a sample does not walk down one column.
  const stride = Math.max(1, Math.ceil(total / 20_000)) | 1;
  const seen: number[] = [];
  let k = 0;
  for (const row of rows) {
    for (; k < row.length; k += stride) {
      const value = row[k] ?? NaN;
      if (Number.isFinite(value)) seen.push(value);
    }
    k -= row.length;
  }
  if (seen.length === 0) return whole;
  seen.sort((a, b) => a - b);
  const at = (share: number) => seen[Math.round(share * (seen.length - 1))] ?? NaN;
  const inward = (quantile: number, extreme: number) =>
    Math.abs(quantile) < Math.abs(extreme) / 2 ? extreme / 2 : quantile;
  if (whole.min >= 0) return { min: whole.min, max: inward(at(0.995), whole.max) };
  if (whole.max <= 0) return { min: inward(at(0.005), whole.min), max: at(0.995) };
  return { min: inward(at(0.005), whole.min), max: inward(at(0.995), whole.max) };
}

/**
 * Limits for what was seen. `seen` in stored units, `factor` to shown ones: it is the shown ends that are round.
 * Nothing seen yet, or nothing but zero: ±1 shown.
 */
export function fittedLimits(
  seen: { min: number; max: number },
  scale: 'diverging' | 'sequential',
  factor: number,
): ColourLimits {
  if (!(seen.min <= seen.max))
    return scale === 'diverging' ? { min: -1 / factor, max: 1 / factor } : { min: 0, max: 1 / factor };
  if (scale === 'diverging') {
    const end = niceCeiling(Math.max(Math.abs(seen.min), Math.abs(seen.max)) * factor) / factor;
    return { min: -end, max: end };
  }
  const span = (seen.max - seen.min) * factor;
  // A scale that nearly reaches zero starts there; otherwise both ends are rounded outward.
  if (seen.min >= 0 && seen.min * factor < 2 * span) return { min: 0, max: niceCeiling(seen.max * factor) / factor };
  // Four steps from a multiple of one of them, so that every tick of the bar is round.
  let whole = niceCeiling(span || Math.abs(seen.max) * factor);
  let low = wholeStepsBelow(seen.min * factor, whole / 4);
  while (low + whole < seen.max * factor) {
    whole = niceCeiling(whole * 1.01);
    low = wholeStepsBelow(seen.min * factor, whole / 4);
  }
  return { min: low / factor, max: (low + whole) / factor };
}

const wholeStepsBelow = (value: number, step: number) => Math.floor(value / step + 1e-9) * step;

/** Limits that only ever grow, so that a plot does not pump while it is being read. */
export function grownLimits(held: ColourLimits | null, fitted: ColourLimits): ColourLimits {
  if (!held) return fitted;
  return { min: Math.min(held.min, fitted.min), max: Math.max(held.max, fitted.max) };
}

/** Levels between the limits, four steps from the middle to each end: zero is among them when they are symmetric. */
export function isolineLevels(limits: ColourLimits): number[] {
  const step = isolineStep(limits);
  const first = Math.ceil(limits.min / step - 1e-9);
  const last = Math.floor(limits.max / step + 1e-9);
  return Array.from({ length: last - first + 1 }, (_, k) => (first + k) * step);
}

/** "2.5 m": the distance between isolines as a caption says it. */
export function isolineWords(limits: ColourLimits, factor: number, unit: string): string {
  return formatQuantity(Number((isolineStep(limits) * factor).toPrecision(3)), unit);
}

export function isolineStep(limits: ColourLimits): number {
  return (limits.max - limits.min) / 8;
}
