import { randomUUID } from 'node:crypto';
import { type Person, RefreshToken, Session, type DeskDatabase } from '@halfdeep/store';
import { ReplaySubject } from 'rxjs';
import { Op, type Transaction } from 'sequelize';
import { type AuditTrail } from '../audit/audit-trail';
import { UnauthenticatedError } from '../http/errors';
import { type Actor, type Caller } from '../policy/actor';
import { signAccess, type AccessClaims } from './access-token';
import { freshToken, hashToken } from './one-use-tokens';
import { rolesOf } from './roles-of';

const MINUTE_MS = 60_000;
const DAY_MS = 24 * 60 * MINUTE_MS;
/** A browser's access token; it is renewed silently. */
export const ACCESS_LIFE_S = 10 * 60;
/** A script's: nothing renews it. Ending the session ends it at once all the same. */
export const SCRIPT_ACCESS_LIFE_S = 60 * 60;
/** A refresh token that is not used for so long is dead. */
export const REFRESH_LIFE_MS = 14 * DAY_MS;
/** And so is a session, however often it is renewed. */
const SESSION_LIFE_MS = 60 * DAY_MS;
/** Longer than any request takes from finding out who asks to listening for the end of their session. */
const REVOKED_REMEMBERED_MS = MINUTE_MS;
/**
 * How long after a trade the traded token still gets what it was traded for: two tabs that wake together send the same
 * token where they cannot wait for each other (browsers have no locks on plain HTTP), and an answer may be lost on the way.
 */
export const TRADE_GRACE_MS = 10_000;

/** A session that has ended; its event streams must end too. */
export interface AccessRevoked {
  sessionId: string;
  personId: string;
  because: string;
}

/** A session's fresh tokens, for the cookies or a script. */
export interface SessionTokens {
  sessionId: string;
  access: string;
  accessExpiresAt: Date;
  refresh: string;
}

/** What a refresh token was just traded for. */
interface Trade {
  tokens: SessionTokens;
  /** ms */
  at: number;
}

/**
 * Sessions: each a family of refresh tokens of which only the newest is good. Using an older one means that somebody has
 * a copy, and ends the family; only the last one traded gets its successor once more within `TRADE_GRACE_MS`. A thief who
 * is that quick gains nothing: of the one successor, too, only the first use is good. Every request asks here whether its
 * session still lives.
 */
export class SessionService {
  private readonly revoked = new ReplaySubject<AccessRevoked>(Infinity, REVOKED_REMEMBERED_MS);
  /**
   * Every session that ends, after that is committed. Event streams of the session close when they hear it; one that was
   * being opened at that moment hears what was said shortly before.
   */
  readonly accessRevoked$ = this.revoked.asObservable();
  /** By the hash of the token that was given. In memory, since the database keeps no token; forgotten after the grace. */
  private readonly justTraded = new Map<string, Trade>();

  constructor(
    private readonly desk: DeskDatabase,
    private readonly audit: AuditTrail,
    private readonly accessKey: string,
    private readonly now: () => Date = () => new Date(),
  ) {}

  /** Opens a session for a person whose password was right, in the caller's transaction. */
  async open(person: Person, address: string, forScript: boolean, transaction: Transaction): Promise<SessionTokens> {
    const now = this.now();
    const session = await Session.create(
      {
        id: randomUUID(),
        personId: person.id,
        createdAt: now,
        expiresAt: new Date(now.getTime() + SESSION_LIFE_MS),
        endedAt: null,
        endedBecause: null,
        address,
      },
      { transaction },
    );
    await person.update({ lastSeenAt: now }, { transaction });
    return this.issue(session, forScript ? SCRIPT_ACCESS_LIFE_S : ACCESS_LIFE_S, transaction);
  }

  private async issue(session: Session, accessLifeS: number, transaction: Transaction): Promise<SessionTokens> {
    const now = this.now();
    const refresh = freshToken();
    const row = { hash: hashToken(refresh), sessionId: session.id, issuedAt: now, rotatedAt: null };
    await RefreshToken.create(row, { transaction });
    const access = signAccess({ sub: session.personId, sid: session.id }, this.accessKey, accessLifeS, now);
    const accessExpiresAt = new Date(now.getTime() + accessLifeS * 1000);
    return { sessionId: session.id, access, accessExpiresAt, refresh };
  }

  /**
   * Trades a refresh token for new tokens. Throws 401; a token that was traded before ends its session, unless that was
   * a moment ago and the successor is unused: then it gets the same tokens again.
   */
  async refresh(token: string, caller: Caller): Promise<SessionTokens> {
    const hash = hashToken(token);
    const traded = await this.desk.write(async (transaction) => {
      const row = await RefreshToken.findByPk(hash, { transaction });
      const session = row && (await this.live(row.sessionId, transaction));
      if (!row || !session) return null;
      if (row.rotatedAt) {
        const tokens = await this.tradedJustNow(hash, transaction);
        if (tokens) return { tokens };
        await this.audit.record(
          {
            by: { actor: null, address: caller.address },
            action: 'ended a session',
            subject: session.person.email,
            detail: 'A refresh token was used a second time: somebody may have copied it.',
          },
          transaction,
        );
        return { reused: session };
      }
      if (row.issuedAt.getTime() + REFRESH_LIFE_MS <= this.now().getTime()) return null;
      await row.update({ rotatedAt: this.now() }, { transaction });
      await session.person.update({ lastSeenAt: this.now() }, { transaction });
      const tokens = await this.issue(session, ACCESS_LIFE_S, transaction);
      this.rememberTrade(hash, tokens);
      return { tokens };
    });
    if (traded?.tokens) return traded.tokens;
    if (traded?.reused) await this.end(traded.reused.id, 'token reused');
    throw new UnauthenticatedError();
  }

  private rememberTrade(hash: string, tokens: SessionTokens): void {
    this.justTraded.set(hash, { tokens, at: this.now().getTime() });
    setTimeout(() => this.justTraded.delete(hash), TRADE_GRACE_MS).unref();
  }

  /** What a token was traded for, if that was within the grace and nobody has used the successor yet. */
  private async tradedJustNow(hash: string, transaction: Transaction): Promise<SessionTokens | null> {
    const trade = this.justTraded.get(hash);
    if (!trade || this.now().getTime() - trade.at > TRADE_GRACE_MS) return null;
    const successor = await RefreshToken.findByPk(hashToken(trade.tokens.refresh), { transaction });
    return successor && !successor.rotatedAt ? trade.tokens : null;
  }

  /** The session with its person and their roles, if it lives and they may sign in. */
  private async live(sessionId: string, transaction?: Transaction): Promise<(Session & { person: Person }) | null> {
    const session = await Session.findOne({
      where: { id: sessionId, endedAt: null, expiresAt: { [Op.gt]: this.now() } },
      include: { association: 'person', include: ['roleRows'] },
      transaction,
    });
    return session?.person?.state === 'active' ? (session as Session & { person: Person }) : null;
  }

  /** The person behind an access token, as they stand now; null when the session has ended. */
  async identify({ sub, sid }: AccessClaims): Promise<Actor | null> {
    const session = await this.live(sid);
    if (session?.personId !== sub) return null;
    const { id, name, email } = session.person;
    return { id, name, email, roles: rolesOf(session.person), sessionId: sid, sessionExpiresAt: session.expiresAt };
  }

  /** The session that a refresh token belongs to, good or traded; null when it is unknown. */
  async ofRefreshToken(token: string): Promise<string | null> {
    return (await RefreshToken.findByPk(hashToken(token)))?.sessionId ?? null;
  }

  /** Ends one session. Ending it twice does nothing. */
  async end(sessionId: string, because: string): Promise<void> {
    const ended = await this.desk.write((transaction) => this.endWhere({ id: sessionId }, because, transaction));
    this.announce(ended);
  }

  /** Ends all sessions of a person in the caller's transaction. Give the answer to `announce` once that has committed. */
  endAllOf(personId: string, because: string, transaction: Transaction): Promise<AccessRevoked[]> {
    return this.endWhere({ personId }, because, transaction);
  }

  private async endWhere(
    which: { id: string } | { personId: string },
    because: string,
    transaction: Transaction,
  ): Promise<AccessRevoked[]> {
    const where = { ...which, endedAt: null };
    const sessions = await Session.findAll({ where, transaction });
    await Session.update({ endedAt: this.now(), endedBecause: because }, { where, transaction });
    return sessions.map((session) => ({ sessionId: session.id, personId: session.personId, because }));
  }

  announce(ended: readonly AccessRevoked[]): void {
    for (const one of ended) this.revoked.next(one);
  }

  /** Removes sessions that ended or expired more than 30 days ago, with their tokens. */
  async sweep(): Promise<void> {
    const old = { [Op.lt]: new Date(this.now().getTime() - 30 * DAY_MS) };
    await this.desk.write((transaction) =>
      Session.destroy({ where: { [Op.or]: [{ endedAt: old }, { expiresAt: old }] }, transaction }),
    );
  }
}
