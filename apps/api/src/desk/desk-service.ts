import { type Desk } from '@halfdeep/contracts';
import { type RunQueue } from '@halfdeep/queue';
import { Run, Visit, type DeskDatabase } from '@halfdeep/store';
import { Op } from 'sequelize';
import { type Actor } from '../policy/actor';
import { type Machine } from '../runs/machine';
import { presentRuns, SUMMARY_COLUMNS } from '../runs/run-presenter';

/** Looking again within this time is still the same visit. */
const SAME_VISIT_MS = 30 * 60_000;
const MOST_ENDED = 24;
const MOST_RECENT = 6;
const ENDED = ['finished', 'stopped', 'failed'];

/** The desk: what moved since a person's last visit. */
export class DeskService {
  constructor(
    private readonly desk: DeskDatabase,
    private readonly queue: RunQueue,
    private readonly machine: Machine,
  ) {}

  /** What computes, what waits, and what ended since the last visit; when nothing did, the few that ended last. */
  async look(actor: Actor, now = new Date()): Promise<Desk> {
    const since = await this.visit(actor.id, now);
    const running = await Run.findAll({
      where: { state: 'running' },
      attributes: SUMMARY_COLUMNS,
      order: [['startedAt', 'ASC']],
    });
    const waiting = await Run.findAll({
      where: { state: 'queued' },
      attributes: SUMMARY_COLUMNS,
      order: [
        ['queueOrder', 'ASC'],
        ['queuedAt', 'ASC'],
      ],
    });
    const fresh = since ? await this.ended(MOST_ENDED, since) : [];
    const ended = fresh.length > 0 ? fresh : await this.ended(MOST_RECENT, null);
    return {
      since: since?.toISOString() ?? null,
      queue: await this.queue.summary(),
      running: await presentRuns(running, actor),
      waiting: await presentRuns(waiting, actor),
      ended: await presentRuns(ended, actor),
      recent: fresh.length === 0,
      disk: await this.machine.disk(),
    };
  }

  private ended(limit: number, since: Date | null): Promise<Run[]> {
    return Run.findAll({
      where: { state: ENDED, ...(since ? { endedAt: { [Op.gt]: since } } : {}) },
      attributes: SUMMARY_COLUMNS,
      order: [['endedAt', 'DESC']],
      limit,
    });
  }

  /** Notes that this person looks, and says from when on things are new to them; null on the first visit. */
  private visit(personId: string, now: Date): Promise<Date | null> {
    return this.desk.write(async (transaction) => {
      const last = await Visit.findByPk(personId, { transaction });
      if (!last) {
        await Visit.create({ personId, seenAt: now, since: null }, { transaction });
        return null;
      }
      const sameVisit = now.getTime() - last.seenAt.getTime() < SAME_VISIT_MS;
      const since = sameVisit ? last.since : last.seenAt;
      await last.update({ seenAt: now, since }, { transaction });
      return since;
    });
  }
}
