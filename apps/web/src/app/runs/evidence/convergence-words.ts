import {
  type Convergence,
  type ConvergenceChoice,
  type ConvergenceLevel,
  type ConvergenceMeasure,
  type RunSummary,
} from '@halfdeep/contracts';
import { type Verdict } from '@halfdeep/ocean';
import { formatCount, formatLatitude, formatLongitude, formatNumber, formatQuantity } from '../../core/format';
import { type RepeatVerdict, isRepeat, repeatVerdict } from '../repeat';

/** A verdict in a word, and its sign: what is not asymptotic is a caution, never a pass. */
export function measureVerdict({ verdict }: Pick<ConvergenceMeasure, 'verdict'>): { verdict: Verdict; text: string } {
  switch (verdict) {
    case 'asymptotic':
      return { verdict: 'pass', text: 'asymptotic' };
    case 'equal':
      return { verdict: 'pass', text: 'no difference' };
    default:
      return { verdict: 'caution', text: verdict };
  }
}

/** The whole table in one line. */
export function convergenceSummary(measures: readonly ConvergenceMeasure[]): { verdict: Verdict; text: string } {
  const moved = measures.filter(({ verdict }) => verdict === 'line moved');
  const doubtful = measures.filter((one) => measureVerdict(one).verdict !== 'pass' && one.verdict !== 'line moved');
  const of = (some: readonly unknown[]) =>
    `${formatCount(some.length, 'transport')} of ${formatNumber(measures.length)} ${some.length === 1 ? 'is' : 'are'}`;
  if (doubtful.length > 0) return { verdict: 'caution', text: `${of(doubtful)} not in the asymptotic range` };
  if (moved.length > 0)
    return {
      verdict: 'caution',
      text: `${of(moved)} not on one line at all three; the rest is in the asymptotic range`,
    };
  const shares = measures.flatMap(({ gci }) => gci?.own.share ?? []);
  if (shares.length === 0) return { verdict: 'pass', text: 'the three grids agree' };
  return {
    verdict: 'pass',
    text: `in the asymptotic range; largest grid convergence index of this run ${percent(Math.max(...shares))}`,
  };
}

export function measureName({ quantity }: Pick<ConvergenceMeasure, 'quantity'>): string {
  return quantity === 'mean' ? 'mean transport' : 'seasonal amplitude';
}

/** "Equator, 0°"; the place alone where the name says no more. */
export function sectionName({ name, along, atDeg }: Pick<ConvergenceMeasure, 'name' | 'along' | 'atDeg'>): string {
  const place = along === 'latitude' ? formatLatitude(atDeg) : formatLongitude(atDeg);
  // A person types an ordinary space between number and letter.
  return name.trim() === '' || name.replace(/\s/g, ' ') === place.replace(/\s/g, ' ') ? place : `${name}, ${place}`;
}

/** "0.22 %" */
export function percent(share: number): string {
  return formatQuantity(100 * share, '%', { significant: 2 });
}

/** "0.012 Sv, 0.22 %": an index beside a value of nothing has no per cent. */
export function indexWords(index: { amount: number; share: number | null }): string {
  const amount = formatQuantity(index.amount, 'Sv', { significant: 2 });
  return index.share === null ? amount : `${amount}, ${percent(index.share)}`;
}

/** The choice to show first: the one that is farthest. */
export function firstChoice({ choices }: Convergence): ConvergenceChoice['coast'] {
  const far = ({ levels, result }: ConvergenceChoice) =>
    (result ? 4 : 0) + levels.filter(({ run }) => run !== null).length;
  const [best] = [...choices].sort((a, b) => far(b) - far(a));
  return best?.coast ?? 'same';
}

/** The coast that a person may still queue something for: the one that is shown, unless both of its runs are there. */
export function openChoice({ choices }: Convergence, shown: ConvergenceChoice['coast']): ConvergenceChoice['coast'] {
  const open = choices.filter(({ levels }) => levels.some(({ run }) => run === null));
  return (open.find(({ coast }) => coast === shown) ?? open[0])?.coast ?? shown;
}

export interface Cost {
  seconds: number;
  diskBytes: number;
  cells: number;
}

/** What queueing the runs that are not there costs together; null when none is left. */
export function costOf(levels: readonly ConvergenceLevel[]): Cost | null {
  const plans = levels.flatMap(({ run, plan }) => (run === null && plan ? [plan] : []));
  if (plans.length === 0) return null;
  const sum = (of: (plan: (typeof plans)[number]) => number) => plans.reduce((total, plan) => total + of(plan), 0);
  return {
    seconds: sum(({ seconds }) => seconds),
    diskBytes: sum(({ diskBytes }) => diskBytes),
    cells: sum(({ nx, ny }) => nx * ny),
  };
}

/** What the repeats of a run say of it. */
export interface RepeatFact extends RepeatVerdict {
  /** The run that it is held against, to be linked; null when nobody repeated it. */
  other: Pick<RunSummary, 'id' | 'label'> | null;
}

/**
 * The latest repeat of a run that has ended with a fingerprint, else the latest; for a run that is a repeat itself and
 * has none of its own, the run that it repeats.
 */
export function repeatFact(run: RunSummary, all: readonly RunSummary[]): RepeatFact {
  const repeats = all
    .filter((one) => one.parentRunId === run.id && isRepeat(one))
    .sort((a, b) => b.createdAt.localeCompare(a.createdAt));
  const latest = repeats.find(({ fingerprint }) => fingerprint !== null) ?? repeats[0];
  if (latest) return factOf(repeatVerdict(latest, run), run, latest);
  const original = isRepeat(run) ? all.find(({ id }) => id === run.parentRunId) : undefined;
  if (original) return factOf(repeatVerdict(run, original), run, original);
  return { verdict: null, text: 'Nobody has computed it a second time yet.', other: null };
}

function factOf(held: RepeatVerdict, run: RunSummary, other: RunSummary): RepeatFact {
  const link = { id: other.id, label: other.label };
  switch (held.verdict) {
    case 'pass':
      return { verdict: 'pass', text: 'the same to the last bit as', other: link };
    case 'caution':
      return {
        verdict: 'caution',
        text: `computed by core version ${other.fingerprint?.coreVersion ?? ''}, this one by ${run.fingerprint?.coreVersion ?? ''}; the two may differ:`,
        other: link,
      };
    case 'refuse':
      return { verdict: 'refuse', text: 'differs, though setup and core version are the same, from', other: link };
    default:
      return { verdict: null, text: 'To be held against this one when both have finished:', other: link };
  }
}
