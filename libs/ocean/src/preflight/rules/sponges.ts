import { readable } from '../../describe/numbers';
import { exp } from '../../exact/elementary';
import { isZonal, spongePeakRate, SPONGE_STRENGTH } from '../../forcing/sponges';
import type { Remedy } from '../../preflight-types';
import type { Sponge } from '../../setup';
import { ratioOfMaximum, ratioOfMinimum, verdictOf, type Case, type Rule } from '../draft';

/** Reflected amplitude that still passes: r_max = 3.45 c/W reflects 0.100 (numerics.md §3). */
const REFLECTED = 0.1;
/** Cells over which a sponge must rise, so that its own edge does not reflect; common practice. */
const CELLS = 4;

/** What a sponge gives back of a normally incident wave, exp(−2 r_max W/(3c)), and its width in cells. */
export function spongeNumbers({ scales }: Pick<Case, 'scales'>, sponge: Sponge): { reflected: number; cells: number } {
  const { c, dx, dy, layout, metresPerDegreeLongitude, metresPerDegreeLatitude } = scales;
  // On a sphere a west or east sponge of a set rate is narrowest in metres at the highest latitude.
  const shrunk = scales.dxSmallest / dx;
  const metresPerDegree = isZonal(sponge) ? metresPerDegreeLongitude * shrunk : metresPerDegreeLatitude;
  const rate = spongePeakRate(sponge, c, metresPerDegree);
  const width = sponge.widthDeg * metresPerDegree;
  const spacing = isZonal(sponge) ? layout.zonal.spacing : layout.meridional.spacing;
  return { reflected: exp((-2 * rate * width) / (3 * c)), cells: dy > 0 ? sponge.widthDeg / spacing : 0 };
}

/** True where a sponge lets too little back to be felt as a wall. */
export function absorbs(of: Pick<Case, 'scales'>, sponge: Sponge): boolean {
  const { reflected, cells } = spongeNumbers(of, sponge);
  return reflected <= REFLECTED && cells >= CELLS;
}

/** Sponges damp interface and currents alike, always; here: how much comes back, and whether the grid resolves them. */
export const spongeRow: Rule = (of) => {
  const { sponges } = of.setup.basin;
  if (sponges.length === 0) return null;
  const found = sponges.map((sponge, k) => {
    const numbers = spongeNumbers(of, sponge);
    const ratio = Math.max(ratioOfMaximum(numbers.reflected, REFLECTED), ratioOfMinimum(numbers.cells, CELLS));
    return { sponge, k, ...numbers, ratio };
  });
  const worst = found.reduce((a, b) => (b.ratio > a.ratio ? b : a));
  const share = (value: number) => `${readable(100 * value, 2)} %`;
  const narrow = worst.cells < CELLS;
  const which = `the ${worst.sponge.edge} sponge`;
  return {
    id: 'sponges',
    label: 'Waves that sponges give back',
    verdict: verdictOf(worst.ratio, false),
    value: worst.reflected,
    limit: REFLECTED,
    unit: 'of the amplitude',
    ratio: worst.ratio,
    reason: narrow
      ? `${which.charAt(0).toUpperCase()}${which.slice(1)} is ${readable(worst.cells)} cells wide and reflects like a wall; give it ${CELLS} or more.`
      : worst.ratio > 1
        ? `${share(worst.reflected)} of a wave comes back from ${which}; at ${SPONGE_STRENGTH} c/W it is 1 %.`
        : `At most ${share(worst.reflected)} of a wave comes back; interface and currents are damped alike, and mass is not conserved there.`,
    pointers: [`/basin/sponges/${worst.k}/widthDeg`, `/basin/sponges/${worst.k}/peakRatePerS`],
    cures: () => stronger(of, found),
  };
};

function stronger(of: Case, found: readonly { sponge: Sponge; k: number; cells: number; ratio: number }[]): Remedy[] {
  const { layout } = of.scales;
  const { westDeg, eastDeg, southDeg, northDeg } = of.setup.basin;
  const changes = found
    .filter(({ ratio }) => ratio > 1)
    .flatMap(({ sponge, k, cells }) => {
      const zonal = isZonal(sponge);
      const spacing = zonal ? layout.zonal.spacing : layout.meridional.spacing;
      const most = (zonal ? eastDeg - westDeg : northDeg - southDeg) / 2;
      const width = Math.min(most, Number((CELLS * spacing * 1.000001).toPrecision(6)));
      return [
        ...(cells < CELLS && width > sponge.widthDeg
          ? [{ pointer: `/basin/sponges/${k}/widthDeg`, value: width }]
          : []),
        ...(sponge.peakRatePerS === null ? [] : [{ pointer: `/basin/sponges/${k}/peakRatePerS`, value: null }]),
      ];
    });
  if (changes.length === 0) return [];
  const widened = changes.some(({ pointer }) => pointer.endsWith('widthDeg'));
  return [{ label: widened ? `Widen to ${CELLS} cells` : `Use ${SPONGE_STRENGTH} c/W`, changes }];
}
