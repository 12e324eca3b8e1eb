import {
  CONVERGENCE_COASTS,
  CONVERGENCE_ROLES,
  setupSchema,
  type Convergence,
  type ConvergenceChoice,
  type ConvergenceCoast,
  type ConvergenceLevel,
  type ConvergenceRole,
  type RunSummary,
} from '@halfdeep/contracts';
import { hasLand, refinedSetup, type Preflight, type Refinement } from '@halfdeep/ocean';
import { ConvergenceRun, Run } from '@halfdeep/store';
import { UniqueConstraintError } from 'sequelize';
import { ConflictError, InputError } from '../http/errors';
import { type Actor } from '../policy/actor';
import { can } from '../policy/policy';
import { presentRuns } from '../runs/run-presenter';
import { type RunService } from '../runs/run-service';
import { type SetupCheck } from '../runs/setup-check';
import { type SliceService } from '../slices/slice-service';
import { compareSections, type Three } from './convergence-measures';

export interface ConvergenceParts {
  runs: RunService;
  check: SetupCheck;
  slices: SliceService;
}

const FACTOR = { half: 0.5, twice: 2 } as const;
const WORDS: Record<ConvergenceRole, string> = { half: 'half resolution', twice: 'twice the resolution' };
const AT: Record<ConvergenceRole, string> = { half: 'half the resolution', twice: 'twice the resolution' };
const MOST_LABEL = 80;
const REFINED_KEPT = 64;

/** A refined setup, or the sentence that says why there is none. */
type Refined = Refinement | string;

/** Runs of one setup at half and at twice its resolution, and what the three say together (Roache 1994). */
export class ConvergenceService {
  /** By run, coast and role, oldest first: a setup never changes. */
  private readonly refined = new Map<string, Refined>();

  constructor(private readonly parts: ConvergenceParts) {}

  /** How far the two other runs are, what they would cost, and the result where all three have finished. */
  async read(base: Run, actor: Actor): Promise<Convergence> {
    const ties = await ConvergenceRun.findAll({ where: { baseRunId: base.id } });
    const rows = await Run.findAll({ where: { id: ties.map(({ runId }) => runId) } });
    const summaries = new Map((await presentRuns(rows, actor)).map((summary) => [summary.id, summary]));
    const found = (coast: ConvergenceCoast, role: ConvergenceRole) => {
      const tie = ties.find((one) => one.coast === coast && one.role === role);
      const row = tie && rows.find(({ id }) => id === tie.runId);
      const summary = row && summaries.get(row.id);
      return row && summary ? { row, summary } : null;
    };
    const choices: ConvergenceChoice[] = [];
    for (const coast of coastsOf(base)) {
      const [half, twice] = CONVERGENCE_ROLES.map((role) => found(coast, role));
      const levels = [
        await this.level(base, coast, 'half', half?.summary ?? null),
        await this.level(base, coast, 'twice', twice?.summary ?? null),
      ];
      const waitingFor = whatIsMissing(base, levels);
      const result = waitingFor === null && half && twice ? await this.result(base, coast, half.row, twice.row) : null;
      choices.push({ coast, levels, waitingFor, result });
    }
    return { runId: base.id, canQueue: can(actor, 'run.refine', subjectOf(base)), choices };
  }

  /**
   * Queues the two runs, or the one of them that is not there; none when one is refused. Throws InputError (422) saying
   * which cannot be made, and why.
   */
  async queue(base: Run, asked: ConvergenceCoast): Promise<void> {
    const coast = coastsOf(base).includes(asked) ? asked : 'same';
    const there = await ConvergenceRun.findAll({ where: { baseRunId: base.id, coast } });
    const drafts: { role: ConvergenceRole; refinement: Refinement; preflight: Preflight }[] = [];
    for (const role of CONVERGENCE_ROLES) {
      if (there.some((tie) => tie.role === role)) continue;
      const refinement = this.refine(base, coast, role);
      if (typeof refinement === 'string') throw refused(role, refinement);
      const preflight = await this.parts.check.check(refinement.setup);
      if (preflight.verdict === 'refuse') throw refused(role, reasons(preflight, 'refuse').join(' '));
      drafts.push({ role, refinement, preflight });
    }
    for (const { role, refinement, preflight } of drafts) {
      const label = labelOf(base, coast, role);
      try {
        await this.parts.runs.derive(
          base,
          { label, setup: refinement.setup, preflight },
          async (runId, transaction) => {
            if ((await Run.count({ where: { id: base.id }, transaction })) === 0)
              throw new ConflictError(`“${base.label}” is gone by now.`);
            await ConvergenceRun.create({ baseRunId: base.id, coast, role, runId }, { transaction });
          },
        );
      } catch (error) {
        // Another request was quicker: its run is the one.
        if (!(error instanceof UniqueConstraintError)) throw error;
      }
    }
  }

  private async level(
    base: Run,
    coast: ConvergenceCoast,
    role: ConvergenceRole,
    run: RunSummary | null,
  ): Promise<ConvergenceLevel> {
    if (run) return { role, run, plan: null, refusal: null };
    const refinement = this.refine(base, coast, role);
    if (typeof refinement === 'string') return { role, run, plan: null, refusal: refinement };
    const preflight = await this.parts.check.check(refinement.setup);
    const { cost, grid, verdict } = preflight;
    const refusals = reasons(preflight, 'refuse');
    const known = new Set(reasons(base.preflight, 'caution'));
    return {
      role,
      run,
      plan: {
        nx: grid.nx,
        ny: grid.ny,
        stepsPerDay: refinement.setup.numerics.stepsPerDay,
        seconds: cost.seconds,
        diskBytes: cost.diskBytes,
        verdict,
        // What preflight said of the run itself, in the same words, is known.
        remarks: [...refusals, ...reasons(preflight, 'caution').filter((reason) => !known.has(reason))],
        notes: refinement.notes,
      },
      refusal: refusals.length > 0 ? refusals.join(' ') : null,
    };
  }

  private async result(
    base: Run,
    coast: ConvergenceCoast,
    half: Run,
    twice: Run,
  ): Promise<ConvergenceChoice['result']> {
    const [coarse, fine] = CONVERGENCE_ROLES.map((role) => this.refine(base, coast, role));
    if (typeof coarse === 'string' || typeof fine === 'string') return null; // they were queued, so they can be made
    const { sectionIntervalDays, sections } = base.setup.output;
    const from = base.progress.totalDays - 366;
    const read = (run: Run) => this.parts.slices.series(run, 'sections', { from: Math.max(0, from) });
    const series: Three<Awaited<ReturnType<typeof read>>> = [await read(half), await read(base), await read(twice)];
    const lines = { half: coarse.sections, twice: fine.sections };
    return {
      ...compareSections(sections, lines, series, sectionIntervalDays),
      remarks: remarksOn([half, base, twice]),
    };
  }

  private refine(base: Run, coast: ConvergenceCoast, role: ConvergenceRole): Refined {
    const key = `${base.id} ${coast} ${role}`;
    const refined = this.refined.get(key) ?? refine(base, coast, role);
    this.refined.delete(key);
    this.refined.set(key, refined);
    const [oldest] = this.refined.keys();
    if (this.refined.size > REFINED_KEPT) this.refined.delete(oldest);
    return refined;
  }
}

function refine(base: Run, coast: ConvergenceCoast, role: ConvergenceRole): Refined {
  try {
    const refinement = refinedSetup(base.setup, FACTOR[role], coast);
    const parsed = setupSchema.safeParse(refinement.setup);
    return parsed.success ? refinement : parsed.error.issues.map(({ message }) => message).join(' ');
  } catch (error) {
    if (error instanceof RangeError) return error.message;
    throw error;
  }
}

/** The ways to treat the coast that differ. */
function coastsOf(base: Run): readonly ConvergenceCoast[] {
  return hasLand(base.setup.basin) ? CONVERGENCE_COASTS : ['same'];
}

function labelOf(base: Run, coast: ConvergenceCoast, role: ConvergenceRole): string {
  const words = `, ${WORDS[role]}${coast === 'anew' ? ', coast anew' : ''}`;
  return `${base.label.slice(0, MOST_LABEL - words.length)}${words}`;
}

function subjectOf({ ownerId, state }: Run) {
  return { ownerId, state, noun: 'run' };
}

function reasons({ checks }: Preflight, verdict: 'caution' | 'refuse'): string[] {
  return checks.filter((check) => check.verdict === verdict).map(({ reason }) => reason);
}

function refused(role: ConvergenceRole, why: string): InputError {
  const detail = `No run at ${AT[role]} can be queued. ${why}`;
  return new InputError(detail, [{ pointer: '/coast', detail }], 422);
}

/** What stands in the way of a result, in one sentence; null when nothing does. */
function whatIsMissing(base: Run, levels: readonly ConvergenceLevel[]): string | null {
  if (base.state !== 'finished') return 'The run itself has not finished.';
  if (base.setup.output.sections.length === 0)
    return 'This run keeps no sections, so that there is no transport to compare.';
  const missing = levels.filter(({ run }) => run === null).map(({ role }) => AT[role]);
  if (missing.length > 0) return `No run has been queued at ${missing.join(' or at ')}.`;
  const going = levels.flatMap(({ role, run }) =>
    run && run.state !== 'finished' ? [`the run at ${AT[role]} is ${run.state}`] : [],
  );
  if (going.length === 0) return null;
  const sentence = going.join(', ');
  return `${sentence[0].toUpperCase()}${sentence.slice(1)}.`;
}

/** What to bear in mind when the three are read as one sequence. */
function remarksOn(three: Three<Run>): string[] {
  const remarks: string[] = [];
  const steps = three.map(({ setup }) => setup.numerics.stepsPerDay);
  if (steps[1] !== 2 * steps[0] || steps[2] !== 2 * steps[1])
    remarks.push(
      `The three take ${steps[0]}, ${steps[1]} and ${steps[2]} steps a day: the time step is not refined in proportion, so that the observed order is not that of the grid alone.`,
    );
  const versions = [...new Set(three.map(({ fingerprint }) => fingerprint?.coreVersion))];
  if (versions.length > 1)
    remarks.push(`They were computed by different versions of the core (${versions.join(', ')}); queue them again.`);
  return remarks;
}
