import { randomUUID } from 'node:crypto';
import { jsonPointer, setupSchema, type Progress, type RunState } from '@halfdeep/contracts';
import { buildGrid, diffSetups, stepRange, type Preflight, type Setup, type SetupChange } from '@halfdeep/ocean';
import { type RunQueue } from '@halfdeep/queue';
import {
  deleteRunFiles,
  Run,
  runPaths,
  type Descent,
  type DeskDatabase,
  type Experiment,
  type RunFileCache,
} from '@halfdeep/store';
import { Op, type Transaction, type WhereOptions } from 'sequelize';
import { type AuditTrail } from '../audit/audit-trail';
import { ConflictError, InputError, NotFoundError } from '../http/errors';
import { containing } from '../http/list';
import { type Caller } from '../policy/actor';
import { type DeskRunLedger } from './desk-run-ledger';
import { orderOf, type PageInput } from './list-query';
import { resumable, SUMMARY_COLUMNS } from './run-presenter';
import { type SetupCheck } from './setup-check';
import { copyStart, startFrom, verifyStart } from './start-state';

/** What the service works on. */
export interface RunServiceParts {
  desk: DeskDatabase;
  audit: AuditTrail;
  ledger: DeskRunLedger;
  queue: RunQueue;
  files: RunFileCache;
  check: SetupCheck;
  varDir: string;
}

interface NewRun {
  label: string;
  setup: Setup;
  parentRunId?: string | null;
}

/** Everything that a new row needs beyond what a queued run starts with. */
interface Draft {
  label: string;
  setup: Setup;
  preflight: Preflight;
  parent: Run | null;
  descent: Descent;
  changes: SetupChange[];
  /** Written in the transaction that makes the row. */
  also?: (id: string, transaction: Transaction) => Promise<void>;
  /** Id of the run whose start state is taken, when it has one. */
  repeatOf?: string;
}

const SORTS = { created: 'createdAt', ended: 'endedAt', label: 'label', state: 'state', disk: 'diskBytes' } as const;

/** Runs: making, finding, stopping, going on, deleting. */
export class RunService {
  constructor(private readonly parts: RunServiceParts) {}

  /** One run with all columns. Throws NotFoundError. */
  async find(id: string): Promise<Run> {
    const run = await Run.findByPk(id);
    if (!run) throw new NotFoundError(`There is no run ${id}.`);
    return run;
  }

  /** A page of runs without their setups, newest first unless sorted otherwise. */
  async list(page: PageInput, filter: { state?: RunState; experimentId?: string; ownerId?: string }) {
    const conditions: WhereOptions<Run>[] = [];
    if (filter.state) conditions.push({ state: filter.state });
    if (filter.experimentId) conditions.push({ experimentId: filter.experimentId });
    if (filter.ownerId) conditions.push({ ownerId: filter.ownerId });
    if (page.q) conditions.push(containing(page.q, ['label']));
    return Run.findAndCountAll({
      where: { [Op.and]: conditions },
      attributes: SUMMARY_COLUMNS,
      order: [orderOf(page.sort, SORTS, 'createdAt'), ['id', 'ASC']],
      limit: page.pageSize,
      offset: (page.page - 1) * page.pageSize,
    });
  }

  /**
   * Queues a new run in an experiment. Throws InputError (422) when preflight refuses, the parent is not there or the
   * start state does not fit, naming the fields; nothing is kept then.
   */
  async create(experiment: Experiment, input: NewRun): Promise<Run> {
    const { label, setup } = input;
    const preflight = await this.parts.check.admit(setup, (pointer) => `/setup${pointer}`);
    const parent = input.parentRunId ? await Run.findByPk(input.parentRunId) : null;
    if (input.parentRunId && !parent) {
      const detail = `There is no run ${input.parentRunId} to come from.`;
      throw new InputError(detail, [{ pointer: '/parentRunId', detail }], 422);
    }
    if (setup.start.kind === 'state') await verifyStart(setup, setup.start, '/setup');
    return this.queueDraft(experiment.id, experiment.ownerId, {
      label,
      setup,
      preflight,
      parent,
      descent: parent ? 'sensitivity' : 'control',
      changes: parent ? diffSetups(parent.setup, setup) : [],
    });
  }

  /** Queues a run that goes on from the last state of a finished one for so many days more. */
  async extend(parent: Run, input: { label: string; days: number }): Promise<Run> {
    const setup: Setup = { ...parent.setup, start: startFrom(parent), length: { days: input.days } };
    const parsed = setupSchema.safeParse(setup);
    if (!parsed.success) {
      const details = parsed.error.issues.map((issue) => `${issue.message} (${jsonPointer(issue.path)})`).join(' ');
      const detail = `“${parent.label}” cannot be extended by ${input.days} d: ${details}`;
      throw new InputError(detail, [{ pointer: '/days', detail }], 422);
    }
    return this.queueDraft(parent.experimentId, parent.ownerId, {
      label: input.label,
      setup,
      preflight: await this.parts.check.admit(setup, () => '/days'),
      parent,
      descent: 'extension',
      changes: diffSetups(parent.setup, setup),
    });
  }

  /**
   * Queues the same setup once more: its fingerprint must come out the same. A start state is copied from the original,
   * which kept it, so that the run that it came from may be gone.
   */
  async repeat(original: Run): Promise<Run> {
    const { setup } = original;
    return this.queueDraft(original.experimentId, original.ownerId, {
      label: `${original.label.slice(0, 70)}, repeated`,
      setup,
      preflight: await this.parts.check.admit(setup, () => ''),
      parent: original,
      descent: 'sensitivity',
      changes: [],
      repeatOf: original.id,
    });
  }

  /**
   * Queues a sensitivity run of another run in its own experiment; preflight has admitted the setup. `also` writes what
   * belongs to it in the same transaction: when that fails, nothing is kept.
   */
  async derive(
    parent: Run,
    input: { label: string; setup: Setup; preflight: Preflight },
    also?: (id: string, transaction: Transaction) => Promise<void>,
  ): Promise<Run> {
    const changes = diffSetups(parent.setup, input.setup);
    return this.queueDraft(parent.experimentId, parent.ownerId, {
      ...input,
      parent,
      descent: 'sensitivity',
      changes,
      also,
    });
  }

  /** Stops a queued or running run at once; what is computed is saved behind the answer. */
  async stop(run: Run, by: Caller): Promise<Run> {
    if (await this.parts.queue.stop(run.id)) {
      if (by.actor?.id !== run.ownerId) await this.note(by, 'stopped a run', run);
      return this.find(run.id);
    }
    const now = await this.find(run.id);
    throw new ConflictError(`“${run.label}” is ${now.state} by now; only a queued or running run can be stopped.`);
  }

  /** Puts a stopped or failed run back into the queue, at its fair place. */
  async resume(run: Run): Promise<Run> {
    if (!resumable(run))
      throw new ConflictError(
        `“${run.label}” failed because of its setup (${run.failure?.message ?? ''}) and would fail again. Make a new ` +
          'sensitivity run with another setup.',
      );
    if (!(await this.parts.ledger.markQueued(run.id, 'resumed', 'back'))) {
      const now = await this.find(run.id);
      throw new ConflictError(`“${run.label}” is ${now.state} by now; only a stopped or failed run can be resumed.`);
    }
    await this.parts.queue.enqueue(run.id);
    return this.find(run.id);
  }

  /** Deletes a run and everything it left on disk. A waiting one leaves the queue first. */
  async delete(run: Run, by: Caller): Promise<void> {
    const { desk, queue, files, varDir } = this.parts;
    if (run.state === 'queued') await queue.stop(run.id);
    await queue.released(run.id);
    const paths = runPaths(varDir, run.id);
    await files.evict(paths.file);
    // Files go inside the transaction: when that fails the row is still there, and deleting can be repeated.
    await desk.write(async (transaction) => {
      const now = await Run.findByPk(run.id, { attributes: ['id', 'state', 'label'], transaction });
      if (!now) return;
      if (now.state === 'running' || now.state === 'queued')
        throw new ConflictError(`“${now.label}” is ${now.state} by now; stop it before deleting it.`);
      await now.destroy({ transaction });
      await this.note(by, 'deleted a run', run, transaction);
      await deleteRunFiles(paths);
    });
  }

  /** Puts into the audit trail what was done to somebody's run, or for good. */
  private note(by: Caller, action: string, run: Run, transaction?: Transaction): Promise<void> {
    const { desk, audit } = this.parts;
    const record = (within: Transaction) =>
      audit.record({ by, action, subject: run.label, detail: `run ${run.id}` }, within);
    return transaction ? record(transaction) : desk.write(record);
  }

  /** Writes the row at its fair place and tells the queue. The start state is copied first, and goes when writing fails. */
  private async queueDraft(experimentId: string, ownerId: string, draft: Draft): Promise<Run> {
    const { desk, ledger, queue, varDir } = this.parts;
    const id = randomUUID();
    const { setup, parent } = draft;
    const grid = buildGrid(setup);
    const now = new Date();
    try {
      if (setup.start.kind === 'state') await copyStart(varDir, setup.start, id, draft.repeatOf);
      await desk.write(async (transaction) => {
        // A parent that was deleted meanwhile leaves its label.
        const stillThere = parent && (await Run.count({ where: { id: parent.id }, transaction })) > 0;
        await Run.create(
          {
            id,
            experimentId,
            ownerId,
            label: draft.label,
            setup,
            preflight: draft.preflight,
            nx: grid.nx,
            ny: grid.ny,
            parentRunId: stillThere ? parent.id : null,
            parentLabel: parent?.label ?? null,
            descent: draft.descent,
            changes: draft.changes,
            state: 'queued',
            queuedReason: null,
            queueOrder: await ledger.orderFor(ownerId, 'back', transaction),
            failure: null,
            deaths: 0,
            createdAt: now,
            queuedAt: now,
            startedAt: null,
            endedAt: null,
            progress: firstProgress(setup),
            fingerprint: null,
            stateSha256: null,
            lastStep: null,
            diskBytes: null,
            workerPid: null,
          },
          { transaction },
        );
        await draft.also?.(id, transaction);
      });
    } catch (error) {
      await deleteRunFiles(runPaths(varDir, id));
      throw error;
    }
    await queue.enqueue(id);
    return this.find(id);
  }
}

/** Progress of a run that has not begun. */
export function firstProgress(setup: Setup): Progress {
  const { startStep, totalSteps } = stepRange(setup);
  const { stepsPerDay } = setup.numerics;
  return {
    step: startStep,
    totalSteps,
    startStep,
    day: startStep / stepsPerDay,
    totalDays: totalSteps / stepsPerDay,
    cellStepsPerSecond: null,
    secondsLeft: null,
    records: { frames: 0, sections: 0, moorings: 0, budget: 0 },
    savedStep: null,
    cautions: [],
  };
}
