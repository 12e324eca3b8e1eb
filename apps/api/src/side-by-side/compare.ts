import { setImmediate as breathe } from 'node:timers/promises';
import { type SideBySide } from '@halfdeep/contracts';
import { buildGrid, deriveMap, type Grid, type Setup } from '@halfdeep/ocean';
import { type RunFileReader } from '@halfdeep/store';
import { joinMoments, measuresOf, noMoments, pairMoments, type PairMoments } from './moments';
import { applyRegridding, bilinear, type CellCentres } from './regrid';

/** Compared at cell centres, so that no variable needs points of its own. */
export const MEASURED = [
  { variable: 'eta', unit: 'm' },
  { variable: 'uCentre', unit: 'm/s' },
  { variable: 'vCentre', unit: 'm/s' },
  { variable: 'speed', unit: 'm/s' },
] as const;
/** Values of one native variable that one read may bring into memory, per run. */
const VALUES_A_READ = 4e6;
const RECORDS_A_READ = 16;

export interface ComparedRun {
  setup: Setup;
  reader: RunFileReader;
}
export type Comparison = Pick<SideBySide, 'reason' | 'regridding' | 'commonDays' | 'measures'>;

/** Frames of one moment in both runs. */
interface RecordPair {
  a: number;
  b: number;
  day: number;
}

/**
 * RMS difference, correlation and RMS of two runs over all moments at which both have a frame and all cells that are
 * water in both, weighted by cell area. Different grids: the finer is brought onto the coarser by bilinear
 * interpolation. Gives the event loop back after every variable of every frame; rejects with the signal's reason.
 */
export async function compareRuns(a: ComparedRun, b: ComparedRun, signal?: AbortSignal): Promise<Comparison> {
  const [gridA, gridB] = [buildGrid(a.setup), buildGrid(b.setup)];
  const pairs = commonRecords(
    { reader: a.reader, frames: (await a.reader.watermarks()).frames.records },
    { reader: b.reader, frames: (await b.reader.watermarks()).frames.records },
  );
  const plan = commonPoints(gridA, gridB);
  const nothing = (reason: string): Comparison => ({
    reason,
    regridding: plan.words,
    commonDays: null,
    measures: measuresTable(MEASURED.map(noMoments)),
  });
  if (!plan.overlap) return nothing('The two basins have no place in common.');
  if (pairs.length === 0) return nothing('The two runs have no moment in common at which both kept a frame.');

  const sums: PairMoments[] = MEASURED.map(noMoments);
  for (const chunk of chunks(pairs, Math.max(gridA.nx * gridA.ny, gridB.nx * gridB.ny))) {
    const [framesA, framesB] = [
      await readFrames(a.reader, gridA, chunk[0].a, chunk[chunk.length - 1].a + 1),
      await readFrames(b.reader, gridB, chunk[0].b, chunk[chunk.length - 1].b + 1),
    ];
    for (const pair of chunk) {
      const stateA = framesA(pair.a, pair.day);
      const stateB = framesB(pair.b, pair.day);
      for (const [k, { variable }] of MEASURED.entries()) {
        const fieldA = plan.toCommonA(deriveMap(variable, gridA, a.setup, stateA).data);
        const fieldB = plan.toCommonB(deriveMap(variable, gridB, b.setup, stateB).data);
        sums[k] = joinMoments(sums[k], pairMoments(fieldA, fieldB, plan.weights));
        await breathe();
        signal?.throwIfAborted();
      }
    }
  }
  if (sums[0].weight === 0) return nothing('No cell is water in both basins.');
  const [first, last] = [pairs[0].day, pairs[pairs.length - 1].day];
  return {
    reason: null,
    regridding: plan.words,
    commonDays: { from: first, to: last, records: pairs.length },
    measures: measuresTable(sums),
  };
}

function measuresTable(sums: PairMoments[]): SideBySide['measures'] {
  return MEASURED.map(({ variable, unit }, k) => ({ variable, unit, ...measuresOf(sums[k]) }));
}

interface Frames {
  reader: Pick<RunFileReader, 'dayOf'>;
  frames: number;
}

/** Frames of the same model day; days are multiples of a quarter, so that they compare exactly. */
export function commonRecords(a: Frames, b: Frames): RecordPair[] {
  const pairs: RecordPair[] = [];
  for (let i = 0, k = 0; i < a.frames && k < b.frames;) {
    const day = a.reader.dayOf('frames', i);
    const other = b.reader.dayOf('frames', k);
    if (day === other) pairs.push({ a: i, b: k, day });
    if (day <= other) i++;
    if (other <= day) k++;
  }
  return pairs;
}

/** Splits the pairs so that one read of a range of records in each run serves a chunk. */
function* chunks(pairs: RecordPair[], cells: number): Generator<RecordPair[]> {
  const most = Math.max(1, Math.min(RECORDS_A_READ, Math.floor(VALUES_A_READ / cells)));
  for (let start = 0; start < pairs.length;) {
    let end = start + 1;
    while (end < pairs.length && pairs[end].a - pairs[start].a < most && pairs[end].b - pairs[start].b < most) end++;
    yield pairs.slice(start, end);
    start = end;
  }
}

type NativeState = Parameters<typeof deriveMap>[3];

/** Reads whole frames rec0 ≤ rec < rec1 and hands out the native fields of one of them. */
async function readFrames(
  reader: RunFileReader,
  grid: Grid,
  rec0: number,
  rec1: number,
): Promise<(record: number, day: number) => NativeState> {
  const eta = await reader.readRows('eta', 0, grid.ny, rec0, rec1);
  const u = await reader.readRows('u', 0, grid.ny, rec0, rec1);
  const v = await reader.readRows('v', 0, grid.ny + 1, rec0, rec1);
  const of = ({ data, shape }: typeof eta, record: number) => {
    const size = shape[1] * shape[2];
    return data.subarray((record - rec0) * size, (record - rec0 + 1) * size);
  };
  return (record, day) => ({ eta: of(eta, record), u: of(u, record), v: of(v, record), day });
}

interface CommonPoints {
  overlap: boolean;
  words: string;
  weights: Float64Array;
  toCommonA(field: Float32Array): ArrayLike<number>;
  toCommonB(field: Float32Array): ArrayLike<number>;
}

function commonPoints(a: Grid, b: Grid): CommonPoints {
  const same = (field: Float32Array) => field;
  if (sameLines(a, b)) {
    const coast = a.mask.every((wet, k) => wet === b.mask[k]);
    const words = coast ? 'same grid' : 'same grid; cells that are land in either run are left out';
    return { overlap: true, words, weights: cellAreas(a), toCommonA: same, toCommonB: same };
  }
  const bOntoA = a.dxC[0] * a.dy >= b.dxC[0] * b.dy;
  const [fine, coarse] = bOntoA ? [b, a] : [a, b];
  const plan = bilinear(centres(fine), centres(coarse));
  const out = new Float64Array(plan.points);
  const regrid = (field: Float32Array) => applyRegridding(plan, field, out);
  const [moved, kept] = bOntoA ? ['B', 'A'] : ['A', 'B'];
  const words =
    `${moved} was brought onto the coarser grid of ${kept} (${coarse.nx} × ${coarse.ny} cells) by bilinear ` +
    'interpolation between cell centres; points that are land in either run are left out';
  return {
    overlap: plan.sources.some((source) => source >= 0),
    words,
    weights: cellAreas(coarse),
    toCommonA: bOntoA ? same : regrid,
    toCommonB: bOntoA ? regrid : same,
  };
}

function sameLines(a: Grid, b: Grid): boolean {
  if (a.nx !== b.nx || a.ny !== b.ny) return false;
  const near = (p: Float64Array, q: Float64Array) => p.every((value, k) => Math.abs(value - q[k]) < 1e-9);
  return near(a.lonCentre, b.lonCentre) && near(a.latCentre, b.latCentre);
}

function cellAreas(grid: Grid): Float64Array {
  return Float64Array.from({ length: grid.nx * grid.ny }, (_, k) => grid.dxC[Math.floor(k / grid.nx)] * grid.dy);
}

function centres(grid: Grid): CellCentres {
  const periodDeg = grid.periodic ? grid.lonFace[grid.nx] - grid.lonFace[0] : null;
  return { lonDeg: grid.lonCentre, latDeg: grid.latCentre, periodDeg };
}
