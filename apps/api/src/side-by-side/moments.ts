/** Weighted first and second moments of pairs, gathered frame by frame. */
export interface PairMoments {
  weight: number;
  meanA: number;
  meanB: number;
  /** Weighted sums of squared deviations and of their product. */
  squareA: number;
  squareB: number;
  product: number;
  /** Weighted sum of (a − b)². */
  squareDifference: number;
}

export const noMoments = (): PairMoments => ({
  weight: 0,
  meanA: 0,
  meanB: 0,
  squareA: 0,
  squareB: 0,
  product: 0,
  squareDifference: 0,
});

/**
 * Moments of one pair of fields with a weight a point. A point where either is NaN (land) is left out. Two passes, so
 * that the deviations of a field on a large mean keep their digits.
 */
export function pairMoments(a: ArrayLike<number>, b: ArrayLike<number>, weights: ArrayLike<number>): PairMoments {
  const m = noMoments();
  for (let k = 0; k < a.length; k++) {
    const w = weights[k];
    const d = a[k] - b[k];
    if (d !== d || w === 0) continue;
    m.weight += w;
    m.meanA += w * a[k];
    m.meanB += w * b[k];
    m.squareDifference += w * d * d;
  }
  if (m.weight === 0) return m;
  m.meanA /= m.weight;
  m.meanB /= m.weight;
  for (let k = 0; k < a.length; k++) {
    const w = weights[k];
    const da = a[k] - m.meanA;
    const db = b[k] - m.meanB;
    if (da * db !== da * db || w === 0) continue;
    m.squareA += w * da * da;
    m.squareB += w * db * db;
    m.product += w * da * db;
  }
  return m;
}

/** Joins two sets of moments (Chan, Golub & LeVeque 1983, eq. 2.1, with weights for counts). */
export function joinMoments(p: PairMoments, q: PairMoments): PairMoments {
  if (p.weight === 0) return q;
  if (q.weight === 0) return p;
  const weight = p.weight + q.weight;
  const dA = q.meanA - p.meanA;
  const dB = q.meanB - p.meanB;
  const share = (p.weight * q.weight) / weight;
  return {
    weight,
    meanA: p.meanA + (dA * q.weight) / weight,
    meanB: p.meanB + (dB * q.weight) / weight,
    squareA: p.squareA + q.squareA + dA * dA * share,
    squareB: p.squareB + q.squareB + dB * dB * share,
    product: p.product + q.product + dA * dB * share,
    squareDifference: p.squareDifference + q.squareDifference,
  };
}

export interface PairMeasures {
  rmsDifference: number | null;
  correlation: number | null;
  rmsA: number | null;
  rmsB: number | null;
}

/**
 * RMS difference, RMS of each, and the area-weighted correlation about the mean over place and time. All null without a
 * common point; the correlation is null when either field is constant (its spread is below the rounding of float32).
 */
export function measuresOf(m: PairMoments): PairMeasures {
  if (m.weight === 0) return { rmsDifference: null, correlation: null, rmsA: null, rmsB: null };
  const meanSquare = (square: number, mean: number) => square / m.weight + mean * mean;
  const rmsA = Math.sqrt(meanSquare(m.squareA, m.meanA));
  const rmsB = Math.sqrt(meanSquare(m.squareB, m.meanB));
  const varies = (square: number, rms: number) => Math.sqrt(square / m.weight) > 1e-7 * rms;
  const r = m.product / Math.sqrt(m.squareA * m.squareB);
  return {
    rmsDifference: Math.sqrt(m.squareDifference / m.weight),
    correlation: varies(m.squareA, rmsA) && varies(m.squareB, rmsB) ? Math.max(-1, Math.min(1, r)) : null,
    rmsA,
    rmsB,
  };
}
