import { type OutboxMail, type Page, type PageQuery } from '@halfdeep/contracts';
import { Mail, type DeskDatabase } from '@halfdeep/store';
import { type Logger } from 'pino';
import { Op, type Transaction } from 'sequelize';
import { containing } from '../http/list';
import { type MailCarrier } from './mail-carrier';
import { openLink, sealLink } from './sealed-link';

export interface Letter {
  to: string;
  subject: string;
  /** `{link}` stands where the link goes. */
  body: string;
  link?: string;
}

const MINUTE_MS = 60_000;
/** Waits before the second and every later attempt; when they are used up the mail has failed. */
const WAITS_MS = [1, 5, 15, 60, 240, 480, 960].map((minutes) => minutes * MINUTE_MS);
const WITHHELD = '[link withheld]';

export interface OutboxOptions {
  /** Demonstration on loopback: links stay readable in the admin's view, since there is no mailbox to look into. */
  showLinks: boolean;
  /** Seals the links while their mails wait. */
  linkKey: string;
  now?: () => Date;
}

/**
 * Mails on their way: written in the transaction of what they tell, sent afterwards, tried again with growing waits.
 * A link is forgotten as soon as its mail is sent or given up.
 */
export class Outbox {
  private timer: NodeJS.Timeout | undefined;
  private sending: Promise<void> = Promise.resolve();
  private closed = false;
  private readonly now: () => Date;

  constructor(
    private readonly desk: DeskDatabase,
    private readonly carrier: MailCarrier,
    private readonly logger: Logger,
    private readonly options: OutboxOptions,
  ) {
    this.now = options.now ?? (() => new Date());
  }

  /** Puts a letter into the outbox, in the caller's transaction. Call `dispatch` when that has committed. */
  async put({ to, subject, body, link }: Letter, transaction: Transaction): Promise<void> {
    const now = this.now();
    const row = { createdAt: now, recipient: to, subject, body, link: null as string | null, nextAttemptAt: now };
    if (link !== undefined) row.link = sealLink(link, this.options.linkKey);
    await Mail.create(row, { transaction });
  }

  /** Sends what is due, now and whenever something becomes due. Resolves when the attempts under way have ended. */
  dispatch(): Promise<void> {
    this.sending = this.sending
      .then(() => this.sendDue())
      .catch((error: unknown) => {
        this.logger.error({ err: error }, 'the outbox could not be read');
      });
    return this.sending;
  }

  private async sendDue(): Promise<void> {
    if (this.closed) return;
    clearTimeout(this.timer);
    const due = await Mail.findAll({
      where: { state: 'waiting', nextAttemptAt: { [Op.lte]: this.now() } },
      order: [['id', 'ASC']],
    });
    for (const mail of due) await this.attempt(mail);
    const next = await Mail.min<Date | null, Mail>('nextAttemptAt', { where: { state: 'waiting' } });
    if (next === null || this.closed) return;
    const wait = Math.max(1000, new Date(next).getTime() - this.now().getTime());
    this.timer = setTimeout(() => void this.dispatch(), Math.min(wait, 60 * MINUTE_MS));
    this.timer.unref();
  }

  private async attempt(mail: Mail): Promise<void> {
    const { recipient: to, subject, body, link } = mail;
    const attempts = mail.attempts + 1;
    let outcome: Partial<Pick<Mail, 'state' | 'error' | 'nextAttemptAt' | 'link'>>;
    try {
      const opened = link === null ? null : openLink(link, this.options.linkKey);
      if (link !== null && opened === null) throw new Error('Its link was sealed with secrets that are gone.');
      await this.carrier.send({ to, subject, text: body.replaceAll('{link}', opened ?? '') });
      outcome = { state: 'sent', error: null, nextAttemptAt: null };
    } catch (error) {
      // Whatever the mail server or the way to it says: the admin reads it in the outbox.
      const reason = error instanceof Error ? error.message : String(error);
      const wait = WAITS_MS[attempts - 1];
      const nextAttemptAt = wait === undefined ? null : new Date(this.now().getTime() + wait);
      outcome = { state: nextAttemptAt ? 'waiting' : 'failed', error: reason, nextAttemptAt };
      this.logger.warn({ mail: mail.id, attempts, reason }, 'a mail was not taken');
    }
    if (outcome.state !== 'waiting' && !this.options.showLinks) outcome.link = null;
    await this.desk.write((transaction) => mail.update({ attempts, ...outcome }, { transaction }));
  }

  /** Newest first; `q` searches recipient and subject. */
  async list({ page, pageSize, q }: PageQuery): Promise<Page<OutboxMail>> {
    const { rows, count } = await Mail.findAndCountAll({
      where: q ? containing(q, ['recipient', 'subject', 'state']) : {},
      order: [['id', 'DESC']],
      limit: pageSize,
      offset: (page - 1) * pageSize,
    });
    return { items: rows.map((row) => this.present(row)), page, pageSize, total: count };
  }

  private present({ id, createdAt, recipient, subject, state, attempts, error, body, link }: Mail): OutboxMail {
    const opened = this.options.showLinks && link !== null ? openLink(link, this.options.linkKey) : null;
    const shown = opened ?? WITHHELD;
    const text = body.replaceAll('{link}', shown);
    return { id, createdAt: createdAt.toISOString(), to: recipient, subject, state, attempts, error, body: text };
  }

  /** Lets the attempt under way end; what waits is sent after the next start. */
  async close(): Promise<void> {
    this.closed = true;
    clearTimeout(this.timer);
    await this.sending;
    await this.carrier.close();
  }
}
