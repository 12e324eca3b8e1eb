import { type AdminQueue, type WorkerInfo } from '@halfdeep/contracts';
import { type RunLedger, type RunQueue } from '@halfdeep/queue';
import { Experiment, Run, type DeskDatabase } from '@halfdeep/store';
import { type AuditTrail } from '../audit/audit-trail';
import { InputError } from '../http/errors';
import { type Actor, type Caller } from '../policy/actor';
import { presentRuns, SUMMARY_COLUMNS } from '../runs/run-presenter';

interface QueuePatch {
  cap?: number;
  whenLowered?: 'drain' | 'checkpoint';
  paused?: boolean;
  order?: string[];
}

export interface AdminQueueParts {
  queue: RunQueue;
  ledger: RunLedger;
  desk: DeskDatabase;
  audit: AuditTrail;
}

/** The queue and the workers as an admin sees and moves them. */
export class AdminQueueService {
  private readonly queue: RunQueue;

  constructor(private readonly parts: AdminQueueParts) {
    this.queue = parts.queue;
  }

  async read(actor: Actor): Promise<AdminQueue> {
    const { cap, paused } = await this.queue.summary();
    const of = (state: 'running' | 'queued', column: string) =>
      Run.findAll({ where: { state }, attributes: SUMMARY_COLUMNS, order: [[column, 'ASC']] });
    return {
      cap,
      maxCap: this.queue.maxCap,
      paused,
      running: await presentRuns(await of('running', 'startedAt'), actor),
      waiting: await presentRuns(await of('queued', 'queueOrder'), actor),
    };
  }

  /** Everything asked takes effect before the answer. Throws InputError (422) for a cap that this machine does not take. */
  async change(patch: QueuePatch, by: Caller): Promise<void> {
    const done: string[] = [];
    if (patch.cap !== undefined && patch.cap > this.queue.maxCap) {
      const detail = `At most ${this.queue.maxCap} runs can compute at once here; ${patch.cap} arrived.`;
      throw new InputError(detail, [{ pointer: '/cap', detail }], 422);
    }
    if (patch.cap !== undefined || patch.whenLowered !== undefined) {
      const settings = await this.parts.ledger.settings();
      const cap = patch.cap ?? settings.cap;
      const whenLowered = patch.whenLowered ?? settings.whenLowered;
      await this.queue.setCap(cap, whenLowered);
      done.push(`cap ${settings.cap} → ${cap}, running work beyond it: ${whenLowered}`);
    }
    if (patch.order !== undefined) {
      await this.queue.reorder(patch.order);
      done.push(`order: ${patch.order.length} runs first`);
    }
    if (patch.paused !== undefined) {
      await this.queue.setPaused(patch.paused);
      done.push(patch.paused ? 'intake paused' : 'intake resumed');
    }
    if (done.length === 0) return;
    const note = { by, action: 'changed the queue', subject: 'queue', detail: done.join('; ') };
    await this.parts.desk.write((transaction) => this.parts.audit.record(note, transaction));
  }

  async workers(): Promise<WorkerInfo[]> {
    const workers = this.queue.workers();
    const runs = await Run.findAll({
      where: { id: workers.map((worker) => worker.runId) },
      attributes: ['id', 'label', 'experimentId'],
    });
    const experiments = await Experiment.findAll({
      where: { id: runs.map((run) => run.experimentId) },
      attributes: ['id', 'question'],
    });
    const byId = new Map(runs.map((run) => [run.id, run]));
    const questions = new Map(experiments.map((experiment) => [experiment.id, experiment.question]));
    return workers.flatMap(({ runId, startedAt, lastHeardAt, ...worker }) => {
      const run = byId.get(runId);
      if (!run) return []; // deleted while its worker still ends
      return [
        {
          ...worker,
          run: { id: run.id, label: run.label, question: questions.get(run.experimentId) ?? '' },
          startedAt: startedAt.toISOString(),
          lastHeardAt: lastHeardAt.toISOString(),
        },
      ];
    });
  }
}
