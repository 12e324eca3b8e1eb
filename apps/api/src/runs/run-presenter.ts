import { type PersonRef, type Run as RunDto, type RunSummary } from '@halfdeep/contracts';
import { Experiment, Person, Run } from '@halfdeep/store';
import { type Actor } from '../policy/actor';
import { can } from '../policy/policy';
import { startFrom } from './start-state';

/** Columns of a run that lists need: all but the setup and what preflight said of it. */
export const SUMMARY_COLUMNS = { exclude: ['setup', 'preflight'] };

/** What a summary says that stands in other rows. */
interface RunContext {
  questions: ReadonlyMap<string, string>;
  owners: ReadonlyMap<string, PersonRef>;
  /** Ids of the waiting runs, next first. */
  waiting: readonly string[];
}

/** Runs as this person sees them, in the order given. */
export async function presentRuns(runs: readonly Run[], actor: Actor): Promise<RunSummary[]> {
  if (runs.length === 0) return [];
  const context = await contextOf(runs);
  return runs.map((run) => toSummary(run, actor, context));
}

/** One run as this person sees it. */
export async function presentRun(run: Run, actor: Actor): Promise<RunSummary> {
  const [summary] = await presentRuns([run], actor);
  return summary;
}

/** One run with its setup and what preflight said when it was queued; read with all columns. */
export async function presentWholeRun(run: Run, actor: Actor): Promise<RunDto> {
  const ended = run.state === 'finished' && run.fingerprint && run.stateSha256 && run.lastStep !== null;
  const lastState = ended ? startFrom(run) : null;
  return { ...(await presentRun(run, actor)), setup: run.setup, preflight: run.preflight, lastState };
}

/** Names of people by id. */
export async function personRefs(ids: readonly string[]): Promise<Map<string, PersonRef>> {
  const people = await Person.findAll({ where: { id: [...new Set(ids)] }, attributes: ['id', 'name'] });
  return new Map(people.map(({ id, name }) => [id, { id, name }]));
}

/** The name of a person who must exist: a foreign key holds that. */
export function refOf(refs: ReadonlyMap<string, PersonRef>, id: string): PersonRef {
  const ref = refs.get(id);
  if (!ref) throw new Error(`There is no person ${id}, who owns something.`);
  return ref;
}

/** What a run allows this person now. */
export function runRights(run: Pick<Run, 'ownerId' | 'state' | 'failure'>, actor: Actor): RunSummary['can'] {
  const subject = { ownerId: run.ownerId, state: run.state };
  return {
    stop: can(actor, 'run.stop', subject),
    resume: can(actor, 'run.resume', subject) && resumable(run),
    extend: can(actor, 'run.extend', subject),
    repeat: can(actor, 'run.repeat', subject),
    derive: can(actor, 'run.queue', subject),
    delete: can(actor, 'run.delete', subject),
  };
}

/** A failure whose cause lies in the setup would come again. */
export function resumable(run: Pick<Run, 'failure'>): boolean {
  const cause = run.failure?.cause;
  return cause !== 'non-finite' && cause !== 'step limit' && cause !== 'outcropping';
}

async function contextOf(runs: readonly Run[]): Promise<RunContext> {
  const experiments = await Experiment.findAll({
    where: { id: [...new Set(runs.map((run) => run.experimentId))] },
    attributes: ['id', 'question'],
  });
  const waiting = runs.some((run) => run.state === 'queued') ? await waitingIds() : [];
  return {
    questions: new Map(experiments.map(({ id, question }) => [id, question])),
    owners: await personRefs(runs.map((run) => run.ownerId)),
    waiting,
  };
}

async function waitingIds(): Promise<string[]> {
  const rows = await Run.findAll({
    where: { state: 'queued' },
    order: [
      ['queueOrder', 'ASC'],
      ['queuedAt', 'ASC'],
    ],
    attributes: ['id'],
  });
  return rows.map((row) => row.id);
}

function toSummary(run: Run, actor: Actor, context: RunContext): RunSummary {
  const place = run.state === 'queued' ? context.waiting.indexOf(run.id) : -1;
  const computing = run.state === 'running';
  return {
    id: run.id,
    experimentId: run.experimentId,
    question: context.questions.get(run.experimentId) ?? '',
    label: run.label,
    state: run.state,
    queuedReason: run.queuedReason,
    queuePosition: place < 0 ? null : place + 1,
    failure: run.failure,
    parentRunId: run.parentRunId,
    parentLabel: run.parentLabel,
    descent: run.descent,
    changes: run.changes,
    owner: refOf(context.owners, run.ownerId),
    createdAt: run.createdAt.toISOString(),
    startedAt: run.startedAt?.toISOString() ?? null,
    endedAt: run.endedAt?.toISOString() ?? null,
    progress: computing ? run.progress : { ...run.progress, cellStepsPerSecond: null, secondsLeft: null },
    fingerprint: run.fingerprint,
    grid: { nx: run.nx, ny: run.ny },
    diskBytes: run.diskBytes,
    can: runRights(run, actor),
  };
}
