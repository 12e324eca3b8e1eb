import { createHash } from 'node:crypto';
import { RepeatedRequest, type DeskDatabase } from '@halfdeep/store';
import { Op } from 'sequelize';
import { InputError } from './errors';

const KEPT_MS = 24 * 3600 * 1000;

interface Answered {
  status: number;
  /** `undefined`: an answer without a body. */
  answer: unknown;
}

/**
 * Idempotency-Key: a request that is sent again, by a nervous finger or a lost connection, gets the answer of the first
 * and does nothing. Kept a day for each person; refusals are not kept, since they did nothing.
 */
export class AnswerOnce {
  private readonly underWay = new Map<string, { request: string; done: Promise<Answered> }>();

  constructor(
    private readonly desk: DeskDatabase,
    private readonly now: () => Date = () => new Date(),
  ) {}

  /** Runs `work`, or gives what it gave before. Throws InputError (422) when the key was used for another request. */
  async run(
    personId: string,
    key: string,
    address: string,
    body: unknown,
    work: () => Promise<Answered>,
  ): Promise<Answered> {
    const hash = createHash('sha256').update(JSON.stringify(body ?? null));
    const request = `${address} ${hash.digest('hex')}`;
    const place = `${personId} ${key}`;
    const running = this.underWay.get(place);
    if (running) {
      refuseOther(running.request, request);
      return running.done;
    }
    const done = this.once(personId, key, request, work);
    this.underWay.set(place, { request, done });
    try {
      return await done;
    } finally {
      this.underWay.delete(place);
    }
  }

  private async once(personId: string, key: string, request: string, work: () => Promise<Answered>): Promise<Answered> {
    const oldest = new Date(this.now().getTime() - KEPT_MS);
    const kept = await RepeatedRequest.findOne({ where: { personId, key, at: { [Op.gte]: oldest } } });
    if (kept) {
      refuseOther(kept.request, request);
      return { status: kept.status, answer: kept.answer === '' ? undefined : (JSON.parse(kept.answer) as unknown) };
    }
    const { status, answer } = await work();
    await this.desk.write(async (transaction) => {
      await RepeatedRequest.destroy({ where: { at: { [Op.lt]: oldest } }, transaction });
      const text = answer === undefined ? '' : JSON.stringify(answer);
      await RepeatedRequest.upsert({ personId, key, request, status, answer: text, at: this.now() }, { transaction });
    });
    return { status, answer };
  }
}

function refuseOther(first: string, now: string): void {
  if (first !== now)
    throw new InputError('This Idempotency-Key was used for another request; take a new one.', undefined, 422);
}
