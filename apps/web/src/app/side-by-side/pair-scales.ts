import { type ColourLimits, fittedLimits, grownLimits, typicalSpan } from '../shared/plate/limits';
import { type VariableView } from '../shared/plate/variables';
import { type PairFields } from './pair-fields';

/** One colour scale for A and B, one for B − A; null before anything was read. */
export interface PairScales {
  shared: ColourLimits | null;
  apart: ColourLimits | null;
}

/** The scales that hold what is on show and what they have held: while one looks on they only grow. */
export function grownScales(
  held: PairScales | null,
  { a, b, difference }: PairFields,
  { scale, factor }: Pick<VariableView, 'scale' | 'factor'>,
): PairScales {
  const grown = (before: ColourLimits | null, rows: readonly ArrayLike<number>[], kind: typeof scale) =>
    rows.length > 0 ? grownLimits(before, fittedLimits(typicalSpan(rows), kind, factor)) : before;
  return {
    shared: grown(held?.shared ?? null, [...(a?.rows ?? []), ...(b?.rows ?? [])], scale),
    apart: grown(held?.apart ?? null, difference?.rows ?? [], 'diverging'),
  };
}

/** What stands on a bar before anything was read. */
export function blankScale({ scale, factor }: Pick<VariableView, 'scale' | 'factor'>): ColourLimits {
  return fittedLimits({ min: NaN, max: NaN }, scale, factor);
}
