import { readable, readableBytes } from '../../describe/numbers';
import { LIMITS } from '../../limits';
import type { Remedy } from '../../preflight-types';
import type { Setup } from '../../setup';
import { NO_CURE, ratioOfMaximum, ratioOfMinimum, verdictOf, type Case, type Draft, type Rule } from '../draft';
import { spacingRemedy, upTo } from '../remedies';

const SPACINGS = ['/numerics/spacingLongitudeDeg', '/numerics/spacingLatitudeDeg'];
const EXTENTS = ['/basin/westDeg', '/basin/eastDeg', '/basin/southDeg', '/basin/northDeg'];

/** Number of cells against the hard limits; nothing of the grid is made before this is known. */
export const gridSize: Rule = ({ setup, cost, scales }) => {
  const { min, max } = LIMITS.cells;
  const few = cost.cells < min;
  const ratio = few ? ratioOfMinimum(cost.cells, min) : ratioOfMaximum(cost.cells, max);
  const shape = `${readable(scales.layout.nx, 8)} × ${readable(scales.layout.ny, 8)} = ${readable(cost.cells, 4)} cells`;
  return {
    id: 'cells',
    label: 'Cells',
    verdict: verdictOf(ratio, ratio > 1),
    value: cost.cells,
    limit: few ? min : max,
    unit: 'cells',
    ratio,
    reason:
      ratio > 1
        ? `${shape}; a grid has ${few ? `at least ${min}` : `at most ${readable(max, 7)}`} cells: use a ${few ? 'finer' : 'wider'} spacing.`
        : `${shape} of at most ${readable(max, 7)}.`,
    pointers: [...SPACINGS, ...EXTENTS],
    cures: () => (few ? [0.5, 0.25, 0.1] : [2, 4, 8, 16, 32, 64, 128]).map((factor) => scaledCells(setup, factor)),
  };
};

/** Spacing in km against its hard limits; shown only when it is out of them. */
export const spacingRange: Rule = ({ setup, scales }) => {
  const { min, max } = LIMITS.spacingKm;
  const [small, large] = [Math.min(scales.dxSmallest, scales.dy) / 1000, Math.max(scales.dx, scales.dy) / 1000];
  if (small >= min && large <= max) return null;
  const fine = small < min;
  return {
    id: 'spacing',
    label: 'Grid spacing',
    verdict: 'refuse',
    value: fine ? small : large,
    limit: fine ? min : max,
    unit: 'km',
    ratio: fine ? ratioOfMinimum(small, min) : ratioOfMaximum(large, max),
    reason: `Cells of ${readable((fine ? scales.dxSmallest : scales.dx) / 1000)} by ${readable(scales.dy / 1000)} km; a spacing must lie between ${min} and ${max} km.`,
    pointers: SPACINGS,
    cures: () => (fine ? [2, 4, 8, 16, 32, 64, 128] : [0.5, 0.25, 0.1]).map((factor) => scaledCells(setup, factor)),
  };
};

/** The grid of the coast against the hard limit of cells; shown only when it is beyond. */
export const coastGridSize: Rule = ({ coast }) => {
  if (coast === null || coast.nx * coast.ny <= LIMITS.cells.max) return null;
  const cells = coast.nx * coast.ny;
  return {
    id: 'coast-cells',
    label: 'Cells of the coast’s grid',
    verdict: 'refuse',
    value: cells,
    limit: LIMITS.cells.max,
    unit: 'cells',
    ratio: ratioOfMaximum(cells, LIMITS.cells.max),
    reason: `The grid of the coast would have ${readable(coast.nx, 8)} × ${readable(coast.ny, 8)} cells, at most ${readable(LIMITS.cells.max, 7)}: use a wider spacing for it.`,
    pointers: ['/basin/coastSpacing/longitudeDeg', '/basin/coastSpacing/latitudeDeg'],
    cures: () => [{ label: 'Use the run’s own grid', changes: [{ pointer: '/basin/coastSpacing', value: null }] }],
  };
};

/** Some water must be left; shown only where there is land. */
export const water: Rule = ({ land }) => {
  if (land.hasWater()) return null;
  return {
    id: 'water',
    label: 'Water cells',
    verdict: 'refuse',
    value: 0,
    limit: 1,
    unit: 'cells',
    ratio: ratioOfMinimum(0, 1),
    reason: 'Coast and islands cover every cell of the basin; at least one must be water.',
    pointers: ['/basin/westernCoast', '/basin/islands'],
    cures: NO_CURE,
  };
};

function scaledCells(setup: Setup, factor: number): Remedy {
  const { spacingLongitudeDeg, spacingLatitudeDeg } = setup.numerics;
  const scaled = (degrees: number) => Math.max(upTo(degrees * factor, LIMITS.spacing.max), LIMITS.spacing.min);
  return spacingRemedy(setup, scaled(spacingLongitudeDeg), scaled(spacingLatitudeDeg));
}

/** Disk against what is left of the quota. */
export const diskQuota: Rule = (of) => disk(of, 'disk-quota', 'Disk against the quota', 'quota', of.context.quotaBytes);
/** Disk against what is free on the machine. */
export const diskFree: Rule = (of) =>
  disk(of, 'disk-free', 'Disk against free space', 'free space', of.context.freeDiskBytes);

/** More than half of what there is asks for caution, more than all of it is refused. */
function disk({ setup, cost }: Case, id: string, label: string, what: string, bytes: number | undefined): Draft | null {
  if (bytes === undefined || !Number.isFinite(bytes)) return null;
  const limit = bytes / 2;
  const refused = cost.diskBytes > bytes;
  const ratio = ratioOfMaximum(cost.diskBytes, limit);
  const found = `${readableBytes(cost.diskBytes)} with checkpoints`;
  return {
    id,
    label,
    verdict: verdictOf(ratio, refused),
    value: cost.diskBytes / 1e9,
    limit: limit / 1e9,
    unit: 'GB',
    ratio,
    reason: refused
      ? `${found} do not fit into the ${readableBytes(bytes)} of ${what} that are left.`
      : ratio > 1
        ? `${found} take more than half of the ${readableBytes(bytes)} of ${what} that are left.`
        : `${found}, of ${readableBytes(bytes)} of ${what} left.`,
    pointers: ['/output/frameIntervalDays', '/length/days', ...SPACINGS],
    cures: () => rarerFrames(setup),
  };
}

const INTERVALS = [0.5, 1, 2.5, 5, 7.5, 10, 15, 30, 73, 182.5, 365, 730, 1825, 3650];

/** Longer frame intervals that the run is a whole number of, the shortest first. */
function rarerFrames(setup: Setup): Remedy[] {
  const { days } = setup.length;
  return INTERVALS.filter(
    (interval) => interval > setup.output.frameIntervalDays && Number.isInteger(days / interval),
  ).map((interval) => ({
    label: `Keep a frame every ${readable(interval)} d`,
    changes: [{ pointer: '/output/frameIntervalDays', value: interval }],
  }));
}
