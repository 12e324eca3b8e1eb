import type { Forcing } from '../forcing/forcing';
import type { Grid } from '../grid/grid';
import type { Arena, Layout } from '../stepper/layout';
import type { CoastCorners, ModelSpans, Spans } from '../stepper/spans';
import type { SumsPlace } from '../stepper/sums';
import { freshRuns } from './fresh-runs';

/** Steps for which the kernel gets factors in one call. */
export const STEPS_A_CALL = 64;
/** Steps whose sums one call brings back at most; fewer on grids of many rows. */
const SUMS_BYTES = 4_000_000;
/** Steps in flight at once where the model is larger than the caches. */
export const STEPS_IN_FLIGHT = 4;

export const HEADER_BYTES = 1024;
export const ROW_BYTES = 192;
const CONTEXT_HEAD_BYTES = 64;
// Contexts lie so that their rings do not meet in the same sets of a cache.
const CONTEXT_SKEW_BYTES = 640;

/** Where the compiled stepper finds what it works with, in doubles from the start of the model's data. */
export interface Workspace {
  header: number;
  /** Runs of columns that begin anew: `freshRuns`. */
  fresh: Spans;
  rows: number;
  runs: number;
  perWet: number;
  basisTable: number;
  basisRows: number;
  meridians: number;
  bands: number;
  factors: number;
  sums: number;
  /** Doubles of one step's sums, and how many steps fit. */
  sumStride: number;
  sumSteps: number;
  contexts: number;
  contextStride: number;
  contextCount: number;
}

/** Reserves it behind everything else of a model. `threads`: how many may step it. */
export function reserveWorkspace(
  arena: Arena,
  parts: {
    grid: Pick<Grid, 'nx' | 'ny'>;
    layout: Layout;
    spans: ModelSpans;
    coastCorners: CoastCorners;
    forcing: Forcing;
    sums: SumsPlace;
    threads: number;
  },
): Workspace {
  const { grid, layout, spans, coastCorners, forcing, sums, threads } = parts;
  const fresh = freshRuns(spans.sweep, grid);
  const rowCount = grid.ny + 1;
  const bases = forcing.bases.length;
  const runs = [spans.sweep, spans.cells, spans.uPoints, spans.vPoints, spans.corners, fresh];
  const ints = runs.reduce((count, { bounds }: Spans) => count + bounds.length, coastCorners.columns.length);
  const sumStride = sums.rowLength * (sums.terms.length + 1 + sums.meridians.length);
  const sumSteps = Math.min(STEPS_A_CALL, Math.max(STEPS_IN_FLIGHT, Math.floor(SUMS_BYTES / (8 * sumStride))));
  const contextCount = Math.max(STEPS_IN_FLIGHT, threads);
  const contextBytes = CONTEXT_HEAD_BYTES + 8 * (4 * layout.pitch + layout.ringLength) + CONTEXT_SKEW_BYTES;
  const contextStride = 8 * Math.ceil(contextBytes / 64);
  return {
    fresh,
    header: arena.reserve(HEADER_BYTES / 8),
    rows: arena.reserve((rowCount * ROW_BYTES) / 8),
    runs: arena.reserve(Math.ceil(ints / 2)),
    perWet: arena.reserve(coastCorners.perWet.length),
    basisTable: arena.reserve(2 * bases),
    basisRows: arena.reserve(2 * bases * rowCount),
    meridians: arena.reserve(Math.ceil((rowCount * sums.meridians.length) / 2)),
    bands: arena.reserve(Math.ceil((threads + 1) / 2)),
    factors: arena.reserve(STEPS_A_CALL * bases),
    sums: arena.reserve(sumSteps * sumStride),
    sumStride,
    sumSteps,
    contexts: arena.reserve(contextCount * contextStride),
    contextStride,
    contextCount,
  };
}
