import { randomUUID } from 'node:crypto';
import { type Experiment as ExperimentDto, type ExperimentSummary, type RunState } from '@halfdeep/contracts';
import { describeSetup } from '@halfdeep/ocean';
import { Experiment, Run, type DeskDatabase } from '@halfdeep/store';
import { col, fn, literal, Op, type WhereOptions } from 'sequelize';
import { NotFoundError } from '../http/errors';
import { containing } from '../http/list';
import { type Actor } from '../policy/actor';
import { can } from '../policy/policy';
import { orderOf, type PageInput } from '../runs/list-query';
import { personRefs, presentRuns, refOf, SUMMARY_COLUMNS } from '../runs/run-presenter';

const SORTS = { moved: 'movedAt', created: 'createdAt', question: 'question' } as const;
/** Also sorted by the owner's name, which stands in another table. */
const OWNER_NAME = '(SELECT name FROM people WHERE people.id = "Experiment".owner_id)';

/** Experiments: asking, finding, noting. */
export class ExperimentService {
  constructor(private readonly desk: DeskDatabase) {}

  /** Throws NotFoundError. */
  async find(id: string): Promise<Experiment> {
    const experiment = await Experiment.findByPk(id);
    if (!experiment) throw new NotFoundError(`There is no experiment ${id}.`);
    return experiment;
  }

  /** A page of experiments, what moved last first unless sorted otherwise; `q` searches question, notes and owner. */
  async list(page: PageInput, ownerId: string | null): Promise<{ rows: Experiment[]; count: number }> {
    const conditions: WhereOptions<Experiment>[] = [];
    if (ownerId !== null) conditions.push({ ownerId });
    if (page.q) {
      conditions.push({
        [Op.or]: [
          containing(page.q, ['question', 'notes']),
          literal(`instr(lower(${OWNER_NAME}), ${this.desk.sequelize.escape(page.q.toLowerCase())}) > 0`),
        ],
      });
    }
    const byOwner = page.sort === 'owner' || page.sort === '-owner';
    const [column, direction] = orderOf(byOwner ? undefined : page.sort, SORTS_WITH_OWNER, 'movedAt');
    return Experiment.findAndCountAll({
      where: { [Op.and]: conditions },
      order: [
        byOwner ? [literal(OWNER_NAME), page.sort === 'owner' ? 'ASC' : 'DESC'] : [column, direction],
        ['id', 'ASC'],
      ],
      limit: page.pageSize,
      offset: (page.page - 1) * page.pageSize,
    });
  }

  async create(actor: Actor, input: { question: string; notes: string }): Promise<Experiment> {
    const now = new Date();
    return this.desk.write((transaction) =>
      Experiment.create(
        { id: randomUUID(), ownerId: actor.id, ...input, createdAt: now, movedAt: now, moved: 'Question asked' },
        { transaction },
      ),
    );
  }

  async change(experiment: Experiment, patch: { question?: string; notes?: string }): Promise<Experiment> {
    const changed = [
      ...(patch.question !== undefined && patch.question !== experiment.question ? ['Question'] : []),
      ...(patch.notes !== undefined && patch.notes !== experiment.notes ? ['Notes'] : []),
    ];
    if (changed.length === 0) return experiment;
    const moved = `${changed.join(' and ').replace('and N', 'and n')} changed`;
    return this.desk.write((transaction) =>
      experiment.update({ ...patch, movedAt: new Date(), moved }, { transaction }),
    );
  }

  /** Experiments as this person sees them in a list. */
  async present(experiments: readonly Experiment[], actor: Actor): Promise<ExperimentSummary[]> {
    if (experiments.length === 0) return [];
    const ids = experiments.map((experiment) => experiment.id);
    const owners = await personRefs(experiments.map((experiment) => experiment.ownerId));
    const counts = await runCounts(ids);
    const controls = await controlSetups(ids);
    return experiments.map((experiment) => {
      const subject = { ownerId: experiment.ownerId };
      const control = controls.get(experiment.id);
      return {
        id: experiment.id,
        question: experiment.question,
        owner: refOf(owners, experiment.ownerId),
        createdAt: experiment.createdAt.toISOString(),
        movedAt: experiment.movedAt.toISOString(),
        moved: experiment.moved,
        physics: control ? describeSetup(control.setup) : null,
        runs: counts.get(experiment.id) ?? noRuns(),
        can: { edit: can(actor, 'experiment.edit', subject), queueRuns: can(actor, 'run.queue', subject) },
      };
    });
  }

  /** One experiment with its notes and all its runs, oldest first. */
  async presentWhole(experiment: Experiment, actor: Actor): Promise<ExperimentDto> {
    const [summary] = await this.present([experiment], actor);
    const runs = await Run.findAll({
      where: { experimentId: experiment.id },
      attributes: SUMMARY_COLUMNS,
      order: [
        ['createdAt', 'ASC'],
        ['id', 'ASC'],
      ],
    });
    return { ...summary, notes: experiment.notes, runList: await presentRuns(runs, actor) };
  }
}

// Named so that a refusal lists it; its column is never used.
const SORTS_WITH_OWNER = { ...SORTS, owner: '' };

const noRuns = (): ExperimentSummary['runs'] => ({ queued: 0, running: 0, finished: 0, stopped: 0, failed: 0 });

async function runCounts(experimentIds: readonly string[]): Promise<Map<string, ExperimentSummary['runs']>> {
  const rows = (await Run.findAll({
    where: { experimentId: [...experimentIds] },
    attributes: ['experimentId', 'state', [fn('count', col('id')), 'n']],
    group: ['experimentId', 'state'],
    raw: true,
  })) as unknown as { experimentId: string; state: RunState; n: number }[];
  const counts = new Map<string, ExperimentSummary['runs']>();
  for (const { experimentId, state, n } of rows) {
    const runs = counts.get(experimentId) ?? noRuns();
    runs[state] = n;
    counts.set(experimentId, runs);
  }
  return counts;
}

/** The first control run of each experiment; the first run where the control was deleted. */
async function controlSetups(experimentIds: readonly string[]): Promise<Map<string, Run>> {
  const first =
    '(SELECT id FROM runs AS r WHERE r.experiment_id = "Run".experiment_id ' +
    `ORDER BY r.descent <> 'control', r.created_at, r.id LIMIT 1)`;
  const rows = await Run.findAll({
    where: { experimentId: [...experimentIds], id: { [Op.eq]: literal(first) } },
    attributes: ['id', 'experimentId', 'setup'],
  });
  return new Map(rows.map((run) => [run.experimentId, run]));
}
