import type { RunSummary } from '@halfdeep/contracts';
import { formatChange, formatDuration, formatModelDay, formatModelLength, formatModelTime } from '../../core/format';

/** A run in the descent and the runs that were made from it. The run itself is looked up by id, since it moves. */
export interface DescentNode {
  id: string;
  children: DescentNode[];
}

/** The trees of an experiment: roots are runs whose parent is not among them; elder before younger. */
export function descentOf(runs: readonly Pick<RunSummary, 'id' | 'parentRunId' | 'createdAt'>[]): DescentNode[] {
  const ids = new Set(runs.map(({ id }) => id));
  const byAge = [...runs].sort((a, b) => a.createdAt.localeCompare(b.createdAt) || a.id.localeCompare(b.id));
  const nodeOf = (id: string, above: ReadonlySet<string>): DescentNode => {
    const line = new Set(above).add(id);
    return {
      id,
      // A run that would be its own ancestor is left out rather than followed for ever.
      children: byAge.filter((run) => run.parentRunId === id && !line.has(run.id)).map((run) => nodeOf(run.id, line)),
    };
  };
  return byAge
    .filter(({ parentRunId }) => parentRunId === null || !ids.has(parentRunId))
    .map(({ id }) => nodeOf(id, new Set()));
}

/** Written above the course line: each change, or the first two "and 3 more" when there are more than three. */
export function changesAbove(run: Pick<RunSummary, 'changes' | 'descent'>): string[] {
  if (run.descent === 'extension') return ['goes on from its last state'];
  const texts = run.changes.map(({ label, from, to, unit }) => `${label} ${formatChange(from, to, unit)}`);
  if (texts.length === 0) return ['the same setup'];
  return texts.length > 3 ? [...texts.slice(0, 2), `and ${texts.length - 2} more`] : texts;
}

/** Written below it: how far the run came, and why no further. */
export function outcomeBelow(
  run: Pick<RunSummary, 'state' | 'progress' | 'failure' | 'queuePosition' | 'queuedReason' | 'startedAt' | 'endedAt'>,
): string {
  const { day, totalDays } = run.progress;
  switch (run.state) {
    case 'queued': {
      const place = run.queuePosition === null ? 'waits' : `place ${run.queuePosition} in the queue`;
      return run.queuedReason ? `${place}, ${run.queuedReason}` : place;
    }
    case 'running':
      return formatModelTime(day, totalDays);
    case 'finished': {
      const seconds = secondsTaken(run);
      const length = formatModelLength(totalDays);
      return seconds === null ? length : `${length}, ${formatDuration(seconds)} from start to end`;
    }
    case 'stopped':
      return `stopped at ${formatModelDay(day)}`;
    case 'failed': {
      const at = run.failure?.day ?? day;
      return `at ${formatModelDay(at)}: ${run.failure?.message ?? 'no cause was kept'}`;
    }
  }
}

/** From the start to the end of a run, as the clock on the wall has it; null while it is not known. */
export function secondsTaken({ startedAt, endedAt }: Pick<RunSummary, 'startedAt' | 'endedAt'>): number | null {
  return startedAt && endedAt ? (Date.parse(endedAt) - Date.parse(startedAt)) / 1000 : null;
}

/** Share of the run that is done, 0 to 1. */
export function shareDone({ progress: { step, startStep, totalSteps } }: Pick<RunSummary, 'progress'>): number {
  return totalSteps > startStep ? (step - startStep) / (totalSteps - startStep) : 0;
}
