import type { Check, Preflight, PreflightContext, Remedy, Verdict } from '../preflight-types';
import type { Setup } from '../setup';
import { coastLayout, coastNotes } from '../grid/coast-grid';
import { costOf } from './cost';
import { derivedNumbers } from './derived';
import type { Case, Draft, Rule } from './draft';
import { LandRows } from './land-rows';
import { applyRemedy, withinLimits } from './remedies';
import * as resolution from './rules/resolution';
import * as length from './rules/season-and-length';
import * as size from './rules/size';
import * as places from './rules/start-and-places';
import * as sponges from './rules/sponges';
import * as step from './rules/step';
import { scalesOf } from './scales';
import { proposedSteps } from './step-limits';
import { startThinning } from './thinning';

/** Every rule of numerics.md §5 and §10, in the order in which equals are shown. */
const RULES: readonly Rule[] = [
  size.gridSize,
  size.spacingRange,
  size.coastGridSize,
  size.water,
  step.stepAgainstGravity,
  step.stepAgainstRotation,
  step.stepAgainstViscosity,
  step.stepAgainstBoth,
  step.stepAgainstFlow,
  resolution.equatorialResolution,
  resolution.coastalWaves,
  resolution.wallLayer,
  resolution.polewardWalls,
  sponges.spongeRow,
  length.thinning,
  length.lengthAgainstMemory,
  length.wholeIntervals,
  places.startMode,
  places.wholeWaves,
  places.startStep,
  places.nothingMoves,
  places.noRotation,
  places.sectionsOnLand,
  places.mooringsOnLand,
  size.diskQuota,
  size.diskFree,
];

const RANK: Record<Verdict, number> = { refuse: 0, caution: 1, pass: 2 };

/**
 * What a setup means before it is run: derived numbers, checks with reasons and remedies, cost. The setup must be one
 * that its schema accepts. A few milliseconds for any of them, since no array of cells is made. Every remedy was tried:
 * with it the row passes, or at least is no longer refused, and nothing else becomes refused.
 */
export function preflight(setup: Setup, context: PreflightContext = {}): Preflight {
  const given = caseOf(setup, context);
  const drafts = draftsOf(given);
  const checks = drafts.map(({ cures, ...row }): Check => {
    if (row.verdict === 'pass') return { ...row, remedy: null };
    return { ...row, remedy: firstThatCures(cures(), row, drafts, given) };
  });
  const { scales, cost } = given;
  const { layout } = scales;
  return {
    verdict: worst(checks),
    derived: derivedNumbers(given),
    checks: checks.sort((a, b) => RANK[a.verdict] - RANK[b.verdict] || b.ratio - a.ratio),
    cost: { ...cost, wetCells: given.land.wetCells() },
    grid: { nx: layout.nx, ny: layout.ny, dxM: scales.dx, dyM: scales.dy, dtS: scales.dt },
    notes: [...layout.notes, ...given.coastNotes],
    proposedStepsPerDay: proposedSteps(scales.rates),
  };
}

function caseOf(setup: Setup, context: PreflightContext, like?: Case): Case {
  // What a remedy leaves alone is not worked out again.
  const sameBasin = like !== undefined && like.setup.basin === setup.basin;
  const sameWind = sameBasin && like.setup.wind === setup.wind && like.setup.layer === setup.layer;
  const scales = scalesOf(setup, sameWind ? like.wind : undefined);
  const sameGrid = sameBasin && like.scales.dx === scales.dx && like.scales.dy === scales.dy;
  const land = sameGrid ? like.land : LandRows.of(setup, scales.layout);
  const coast = coastLayout(setup);
  return {
    setup,
    context,
    scales,
    land,
    coast,
    coastNotes: coast ? coastNotes(scales.layout, coast) : [],
    cost: costOf(setup, scales.layout, context),
    wind: scales.wind,
    startThinning: startThinning(setup),
  };
}

function draftsOf(of: Case): Draft[] {
  return RULES.flatMap((rule) => rule(of) ?? []);
}

/** The first remedy with which the row passes and no other gets worse, else the first with which fewer are refused. */
function firstThatCures(
  remedies: readonly Remedy[],
  row: Pick<Draft, 'id' | 'verdict'>,
  before: readonly Draft[],
  given: Case,
): Remedy | null {
  let second: Remedy | null = null;
  for (const remedy of remedies) {
    if (remedy.changes.length === 0 || !withinLimits(remedy)) continue;
    const after = draftsOf(caseOf(applyRemedy(given.setup, remedy), given.context, given));
    const now = after.find(({ id }) => id === row.id)?.verdict ?? 'pass';
    const worse = after.filter(({ id, verdict }) => RANK[verdict] < RANK[verdictIn(before, id)]);
    if (now === 'pass' && worse.length === 0) return remedy;
    const newlyRefused = worse.some(({ verdict }) => verdict === 'refuse');
    if (second === null && RANK[now] > RANK[row.verdict] && !newlyRefused) second = remedy;
  }
  return second;
}

function verdictIn(drafts: readonly Draft[], id: string): Verdict {
  return drafts.find((draft) => draft.id === id)?.verdict ?? 'pass';
}

function worst(checks: readonly Check[]): Verdict {
  return checks.reduce<Verdict>((found, { verdict }) => (RANK[verdict] < RANK[found] ? verdict : found), 'pass');
}
