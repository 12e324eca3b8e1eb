import type { VerificationPlate } from '@halfdeep/contracts';

type Points = [number, number][];

/** Enough for a curve to look smooth; a report holds dozens of plates. */
const MOST_POINTS = 160;
const digits = (value: number) => Number(value.toPrecision(6));

/**
 * Errors against spacing on logarithmic axes, with a line of the expected order through the finest error.
 * spacings: coarse to fine, in the unit that `label` names.
 */
export function convergencePlate(
  caption: string,
  label: string,
  spacings: readonly number[],
  errors: readonly { name: string; values: readonly number[] }[],
  expectedOrder = 2,
): VerificationPlate {
  const series: VerificationPlate['series'] = errors.map(({ name, values }) => ({
    name,
    role: 'found',
    points: sorted(spacings.map((spacing, k) => [digits(spacing), digits(Math.abs(values[k]))])),
  }));
  const [finest, coarsest] = [Math.min(...spacings), Math.max(...spacings)];
  const fine = Math.abs(errors[0].values[spacings.indexOf(finest)]);
  series.push({
    name: `order ${expectedOrder}`,
    role: 'slope',
    points: [
      [digits(finest), digits(fine)],
      [digits(coarsest), digits(fine * (coarsest / finest) ** expectedOrder)],
    ],
  });
  return { caption, x: { label, log: true }, y: { label: 'error', log: true }, series };
}

/** Profiles found and expected over one axis. */
export function profilePlate(
  caption: string,
  [xLabel, yLabel]: [string, string],
  curves: readonly { name: string; role: 'found' | 'expected'; x: ArrayLike<number>; y: ArrayLike<number> }[],
): VerificationPlate {
  return {
    caption,
    x: { label: xLabel, log: false },
    y: { label: yLabel, log: false },
    series: curves.map(({ name, role, x, y }) => ({ name, role, points: thinned(x, y) })),
  };
}

function thinned(x: ArrayLike<number>, y: ArrayLike<number>): Points {
  const stride = Math.max(1, Math.ceil(x.length / MOST_POINTS));
  const points: Points = [];
  for (let k = 0; k < x.length; k += stride) points.push([digits(x[k]), digits(y[k])]);
  return points;
}

function sorted(points: Points): Points {
  return points.sort(([a], [b]) => a - b);
}
