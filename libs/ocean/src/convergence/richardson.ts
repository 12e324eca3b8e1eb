/** Safety factor of the grid convergence index for three grids with an observed order: Roache (1994). */
export const SAFETY_FACTOR = 1.25;
/** Observed orders within which three grids count as asymptotic; beyond, nothing is extrapolated. */
export const ORDER_RANGE = [0.5, 3] as const;

export type ConvergenceVerdict = 'asymptotic' | 'not monotone' | 'order out of range' | 'equal';

/** An uncertainty, in the unit of the values and as a share of the value that it belongs to; null beside a value of 0. */
export interface Uncertainty {
  amount: number;
  share: number | null;
}

/** What three grids say together; numbers are null where the three do not allow them. */
export interface GridConvergence {
  verdict: ConvergenceVerdict;
  /** Observed order p = ln((f3 − f2)/(f2 − f1)) / ln r; null when the values do not run one way or do not differ. */
  order: number | null;
  /** Richardson extrapolation f1 + (f1 − f2)/(r^p − 1). */
  extrapolated: number | null;
  /** Grid convergence index of the fine and of the medium value. */
  gci: { fine: Uncertainty; medium: Uncertainty } | null;
  /** GCI of the medium value over r^p times that of the fine one, both as shares: near 1 in the asymptotic range. */
  asymptoticRatio: number | null;
  /** The verdict in plain words. */
  sentence: string;
}

/**
 * Richardson extrapolation and grid convergence index of one number on three grids: Roache (1994), J. Fluids Eng. 116,
 * 405–413, GCI = Fs |ε|/(r^p − 1) with Fs = 1.25 and the observed order p. Any unit, the same for all.
 * ratio: spacing of one grid over that of the next finer one, > 1, the same for both steps. negligible: differences no
 * larger than this are none (round-off, at least). RangeError for numbers that are not finite.
 */
export function richardson(
  coarse: number,
  medium: number,
  fine: number,
  ratio: number,
  negligible = 0,
): GridConvergence {
  if (![coarse, medium, fine].every(Number.isFinite))
    throw new RangeError(`Three finite values are needed; ${coarse}, ${medium} and ${fine} arrived.`);
  if (!(ratio > 1 && Number.isFinite(ratio)))
    throw new RangeError(`The ratio of the grids must be greater than 1; ${ratio} arrived.`);
  const roundOff = 4 * Number.EPSILON * Math.max(Math.abs(coarse), Math.abs(medium), Math.abs(fine));
  const small = Math.max(roundOff, negligible);
  const first = coarse - medium;
  const second = medium - fine;
  const moves = (difference: number) => Math.abs(difference) > small;
  if (!moves(first) && !moves(second))
    return nothing('equal', null, 'The three grids agree; there is nothing to extrapolate.');
  if (moves(first) && moves(second) && first > 0 !== second > 0)
    return nothing(
      'not monotone',
      null,
      'Not in the asymptotic range: the value goes up on one refinement and down on the other.',
    );
  // A step without any change has an order of ±∞, which no number can say.
  const order = moves(first) && moves(second) ? Math.log(first / second) / Math.log(ratio) : null;
  const [least, most] = ORDER_RANGE;
  if (order === null)
    return nothing(
      'order out of range',
      null,
      moves(first)
        ? 'Not in the asymptotic range: the second refinement changes nothing that the first one changed.'
        : 'Not in the asymptotic range: the second refinement changes what the first one left alone.',
    );
  // A logarithm of exact powers may miss the bound by a rounding error.
  if (!(order >= least - 1e-9 && order <= most + 1e-9))
    return nothing('order out of range', order, orderSentence(order));

  const gain = ratio ** order - 1;
  const amount = (difference: number) => (SAFETY_FACTOR * Math.abs(difference)) / gain;
  const gci = {
    fine: uncertainty(amount(second), fine, small),
    medium: uncertainty(amount(first), medium, small),
  };
  const [fineShare, mediumShare] = [gci.fine.share, gci.medium.share];
  return {
    verdict: 'asymptotic',
    order,
    extrapolated: fine - second / gain,
    gci,
    asymptoticRatio: fineShare === null || mediumShare === null ? null : mediumShare / (ratio ** order * fineShare),
    sentence: `In the asymptotic range, with an observed order of ${order.toFixed(2)}.`,
  };
}

function uncertainty(amount: number, value: number, small: number): Uncertainty {
  return { amount, share: Math.abs(value) > small ? amount / Math.abs(value) : null };
}

function nothing(verdict: ConvergenceVerdict, order: number | null, sentence: string): GridConvergence {
  return { verdict, order, extrapolated: null, gci: null, asymptoticRatio: null, sentence };
}

function orderSentence(order: number): string {
  const number = order.toFixed(2).replace('-', '−');
  if (order <= 0)
    return `Not in the asymptotic range: the second refinement changes the value more than the first (observed order ${number}).`;
  const bound = order < ORDER_RANGE[0] ? `below ${ORDER_RANGE[0]}` : `above ${ORDER_RANGE[1]}`;
  return `Not in the asymptotic range: the observed order is ${number}, ${bound}.`;
}
