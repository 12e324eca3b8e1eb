import { type Progress, type QueuedReason, type RunFailure } from '@halfdeep/contracts';
import { type FinishedRun, type LedgerRun, type QueueSettings, type RunLedger } from '@halfdeep/queue';
import { DeskSetting, fairPlace, Run, wantedOrder, type DeskDatabase } from '@halfdeep/store';
import { Op, type Transaction, type WhereOptions } from 'sequelize';
import * as z from 'zod';

const SETTINGS_KEY = 'queue';
const settingsSchema = z.object({
  cap: z.number().int().min(1),
  paused: z.boolean(),
  whenLowered: z.enum(['drain', 'checkpoint']),
});
const LEDGER_COLUMNS = ['id', 'setup', 'state', 'queuedReason', 'deaths', 'workerPid'];
const IN_ORDER: [string, string][] = [
  ['queueOrder', 'ASC'],
  ['queuedAt', 'ASC'],
];
/** Below this gap between two neighbours the whole list is numbered anew. */
const SMALLEST_GAP = 1e-6;

/** The run ledger on the desk database. */
export class DeskRunLedger implements RunLedger {
  /** `initial` holds until an admin has changed something. */
  constructor(
    private readonly desk: DeskDatabase,
    private readonly initial: QueueSettings,
  ) {}

  async settings(): Promise<QueueSettings> {
    const kept = await DeskSetting.read(SETTINGS_KEY);
    return kept === undefined ? { ...this.initial } : settingsSchema.parse(kept);
  }

  async saveSettings(settings: QueueSettings): Promise<void> {
    await this.desk.write((transaction) => DeskSetting.keep(SETTINGS_KEY, settings, transaction));
  }

  async find(runId: string): Promise<LedgerRun | null> {
    const run = await Run.findByPk(runId, { attributes: LEDGER_COLUMNS });
    return run && toLedgerRun(run);
  }

  async waiting(): Promise<LedgerRun[]> {
    const rows = await Run.findAll({ where: { state: 'queued' }, order: IN_ORDER, attributes: LEDGER_COLUMNS });
    return rows.map(toLedgerRun);
  }

  async running(): Promise<LedgerRun[]> {
    const rows = await Run.findAll({
      where: { state: 'running' },
      order: [['startedAt', 'ASC']],
      attributes: LEDGER_COLUMNS,
    });
    return rows.map(toLedgerRun);
  }

  claimNext(): Promise<LedgerRun | null> {
    return this.desk.write(async (transaction) => {
      const run = await Run.findOne({ where: { state: 'queued' }, order: IN_ORDER, transaction });
      if (!run) return null;
      await run.update(
        {
          state: 'running',
          queuedReason: null,
          queueOrder: null,
          failure: null,
          endedAt: null,
          startedAt: run.startedAt ?? new Date(),
        },
        { transaction },
      );
      return toLedgerRun(run);
    });
  }

  markQueued(runId: string, reason: QueuedReason | null, place: 'front' | 'back'): Promise<boolean> {
    return this.desk.write(async (transaction) => {
      const run = await Run.findOne({
        where: { id: runId, state: place === 'front' ? 'running' : ['stopped', 'failed'] },
        attributes: ['id', 'ownerId'],
        transaction,
      });
      if (!run) return false;
      const queueOrder = await this.orderFor(run.ownerId, place, transaction, runId);
      await Run.update(
        {
          state: 'queued',
          queuedReason: reason,
          queueOrder,
          queuedAt: new Date(),
          workerPid: null,
          endedAt: null,
          failure: null,
          ...(place === 'back' ? { deaths: 0 } : {}),
        },
        { where: { id: runId }, transaction },
      );
      return true;
    });
  }

  markFinished(runId: string, finished: FinishedRun): Promise<boolean> {
    const { fingerprint, stateSha256, lastStep, progress } = finished;
    return this.change(
      { id: runId, state: ['running', 'stopped'] },
      { state: 'finished', fingerprint, stateSha256, lastStep, progress, endedAt: new Date(), workerPid: null },
    );
  }

  markStopped(runId: string): Promise<boolean> {
    return this.change(
      { id: runId, state: ['running', 'queued'] },
      { state: 'stopped', queuedReason: null, queueOrder: null, endedAt: new Date() },
    );
  }

  markFailed(runId: string, failure: RunFailure): Promise<boolean> {
    return this.change(
      { id: runId, state: ['running', 'queued'] },
      { state: 'failed', failure, queuedReason: null, queueOrder: null, endedAt: new Date(), workerPid: null },
    );
  }

  async recordWorker(runId: string, pid: number | null): Promise<void> {
    await this.change({ id: runId }, { workerPid: pid });
  }

  async recordProgress(runId: string, progress: Progress, diskBytes: number | null): Promise<void> {
    await this.change({ id: runId }, { progress, ...(diskBytes === null ? {} : { diskBytes }) });
  }

  countDeath(runId: string): Promise<number> {
    return this.desk.write(async (transaction) => {
      await Run.increment({ deaths: 1 }, { where: { id: runId }, transaction });
      const run = await Run.findByPk(runId, { attributes: ['deaths'], transaction });
      return run?.deaths ?? 0;
    });
  }

  async clearDeaths(runId: string): Promise<void> {
    await this.change({ id: runId }, { deaths: 0 });
  }

  async reorder(runIds: readonly string[]): Promise<void> {
    await this.desk.write(async (transaction) => {
      const waiting = await this.waitingOwners(transaction);
      await this.number(
        wantedOrder(
          waiting.map((run) => run.id),
          runIds,
        ),
        transaction,
      );
    });
  }

  /**
   * The order number of a run that joins the waiting: before all of them, or at its fair place between owners.
   * `except` is the run itself when it counts among the running still.
   */
  async orderFor(
    ownerId: string,
    place: 'front' | 'back',
    transaction: Transaction,
    except: string | null = null,
  ): Promise<number> {
    let waiting = await this.waitingOwners(transaction);
    let at = 0;
    if (place === 'back') at = fairPlace(waiting, ownerId, await this.runningByOwner(transaction, except));
    let before = at > 0 ? waiting[at - 1].queueOrder : 0;
    if (at > 0 && at < waiting.length && waiting[at].queueOrder - before < SMALLEST_GAP) {
      await this.number(
        waiting.map((run) => run.id),
        transaction,
      );
      waiting = await this.waitingOwners(transaction);
      before = waiting[at - 1].queueOrder;
    }
    if (waiting.length === 0) return 1;
    if (at === 0) return waiting[0].queueOrder - 1;
    return at === waiting.length ? before + 1 : (before + waiting[at].queueOrder) / 2;
  }

  private async waitingOwners(
    transaction: Transaction,
  ): Promise<{ id: string; ownerId: string; queueOrder: number }[]> {
    const rows = await Run.findAll({
      where: { state: 'queued' },
      order: IN_ORDER,
      attributes: ['id', 'ownerId', 'queueOrder'],
      transaction,
    });
    return rows.map((row) => ({ id: row.id, ownerId: row.ownerId, queueOrder: row.queueOrder ?? 0 }));
  }

  private async runningByOwner(transaction: Transaction, except: string | null): Promise<Map<string, number>> {
    const rows = await Run.findAll({
      where: { state: 'running', ...(except === null ? {} : { id: { [Op.ne]: except } }) },
      attributes: ['ownerId'],
      transaction,
    });
    const counts = new Map<string, number>();
    for (const row of rows) counts.set(row.ownerId, (counts.get(row.ownerId) ?? 0) + 1);
    return counts;
  }

  private async number(ids: readonly string[], transaction: Transaction): Promise<void> {
    for (const [k, id] of ids.entries())
      await Run.update({ queueOrder: k + 1 }, { where: { id, state: 'queued' }, transaction });
  }

  /** One guarded update; false when no row was in an allowed state. */
  private change(where: WhereOptions<Run>, values: Parameters<typeof Run.update>[0]): Promise<boolean> {
    return this.desk.write(async (transaction) => {
      const [changed] = await Run.update(values, { where, transaction });
      return changed > 0;
    });
  }
}

function toLedgerRun(run: Run): LedgerRun {
  const { id, setup, state, queuedReason, deaths, workerPid } = run;
  return { runId: id, setup, state, queuedReason, deaths, workerPid };
}
