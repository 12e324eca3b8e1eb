import { randomUUID } from 'node:crypto';
import { type Invitation, type Me } from '@halfdeep/contracts';
import { OneUseToken, Person, PersonRole, type DeskDatabase } from '@halfdeep/store';
import { type Logger } from 'pino';
import { Op, type Transaction } from 'sequelize';
import { type AuditTrail } from '../audit/audit-trail';
import { ConflictError, InputError, RefusedError, UnauthenticatedError } from '../http/errors';
import { type Outbox } from '../mail/outbox';
import { type Actor, type Caller } from '../policy/actor';
import { passwordChangedLetter, resetLetter } from './account-mails';
import { isCommonPassword } from './common-password';
import { makeDeviceMark, readDeviceMark } from './device-mark';
import { findToken, issueToken, withdrawTokens } from './one-use-tokens';
import { type PasswordHasher } from './password-hasher';
import { rolesOf } from './roles-of';
import { type SessionService, type SessionTokens } from './session-service';
import { type SignInGuard } from './sign-in-guard';

const HOUR_MS = 3600_000;
/** Reset mails an hour to one address: a stranger must not fill a mailbox. */
const RESETS_AN_HOUR = 3;
const WRONG = 'E-mail or password is wrong, or the account is not open.';

export interface AccountParts {
  desk: DeskDatabase;
  sessions: SessionService;
  outbox: Outbox;
  audit: AuditTrail;
  hasher: PasswordHasher;
  guard: SignInGuard;
  logger: Logger;
  deviceKey: string;
  /** How people reach this server, without a slash at the end. */
  publicUrl: () => string;
  demonstration: boolean;
  now?: () => Date;
}

export interface SignedIn {
  me: Me;
  tokens: SessionTokens;
  /** For the cookie by which this browser is known again. */
  deviceMark: string;
}

/** Signing in, forgotten passwords, invitations that are accepted. Knows no request. */
export class AccountService {
  private readonly now: () => Date;
  private behind: Promise<void> = Promise.resolve();

  constructor(private readonly parts: AccountParts) {
    this.now = parts.now ?? (() => new Date());
  }

  /**
   * Throws 401 with one and the same sentence, after about the same time, for an unknown address, a wrong password and
   * an account that is not open; 429 when too many attempts came before.
   */
  async signIn(
    credentials: { email: string; password: string },
    caller: Caller,
    options: { deviceMark?: string; forScript: boolean },
  ): Promise<SignedIn> {
    const { desk, sessions, guard, hasher, audit, deviceKey } = this.parts;
    const email = credentials.email.toLowerCase();
    const device = readDeviceMark(options.deviceMark, email, deviceKey);
    const attempt = { address: caller.address, email, device };
    await guard.admit(attempt);
    const person = await Person.findOne({ where: { email, state: 'active' }, include: ['roleRows'] });
    const right = await hasher.matches(credentials.password, person?.passwordHash ?? null);
    if (!person || !right) {
      if (person) this.afterwards((transaction) => this.noteRefusal(person, caller, transaction));
      throw new UnauthenticatedError(WRONG);
    }
    guard.succeeded(attempt);
    const tokens = await desk.write(async (transaction) => {
      // Between the two reads a right may have been lost.
      const still = await Person.findOne({ where: { id: person.id, state: 'active' }, transaction });
      if (still?.passwordHash !== person.passwordHash) throw new UnauthenticatedError(WRONG);
      const opened = await sessions.open(still, caller.address, options.forScript, transaction);
      const by = { actor: person, address: caller.address };
      const detail = options.forScript ? 'for a script' : '';
      await audit.record({ by, action: 'signed in', subject: email, detail }, transaction);
      return opened;
    });
    const me = this.toMe({ id: person.id, name: person.name, email, roles: rolesOf(person) });
    return { me, tokens, deviceMark: device === null ? makeDeviceMark(email, deviceKey) : options.deviceMark! };
  }

  private async noteRefusal(person: Person, caller: Caller, transaction: Transaction): Promise<void> {
    const note = { by: { actor: null, address: caller.address }, action: 'was refused', subject: person.email };
    await this.parts.audit.record({ ...note, detail: 'wrong password' }, transaction);
  }

  toMe({ id, name, email, roles }: Pick<Actor, 'id' | 'name' | 'email' | 'roles'>): Me {
    return { id, name, email, roles: [...roles], demonstration: this.parts.demonstration };
  }

  /** Mails a link to the address if it is somebody's. Returns before that is known, so that the time tells nothing. */
  forgotPassword(address: string, caller: Caller): void {
    const email = address.toLowerCase();
    this.afterwards(async (transaction) => {
      const person = await Person.findOne({ where: { email, state: 'active' }, transaction });
      if (!person) return;
      const since = { [Op.gt]: new Date(this.now().getTime() - HOUR_MS) };
      const where = { personId: person.id, purpose: 'reset' as const, createdAt: since };
      if ((await OneUseToken.count({ where, transaction })) >= RESETS_AN_HOUR) return;
      const token = await issueToken('reset', person.id, null, this.now(), transaction);
      await this.parts.outbox.put(resetLetter(person, `${this.parts.publicUrl()}/reset#${token}`), transaction);
      const by = { actor: null, address: caller.address };
      await this.parts.audit.record({ by, action: 'asked for a new password', subject: email }, transaction);
    });
  }

  /** Sets a new password with a mailed link; ends every session and every other link of that person. */
  async resetPassword(token: string, password: string, caller: Caller): Promise<void> {
    const { desk, sessions, outbox, audit } = this.parts;
    refuseCommon(password);
    if (!(await findToken(token, ['reset'], this.now()))) refuseToken('Ask for a new one.');
    const passwordHash = await this.parts.hasher.hash(password);
    const ended = await desk.write(async (transaction) => {
      const row = await findToken(token, ['reset'], this.now(), transaction);
      const person = row?.personId && (await Person.findByPk(row.personId, { transaction }));
      if (!person || person.state !== 'active') refuseToken('Ask for a new one.');
      await withdrawTokens(person.id, ['reset', 'invitation'], this.now(), transaction);
      await person.update({ passwordHash }, { transaction });
      const by = { actor: person, address: caller.address };
      await audit.record({ by, action: 'set a new password', subject: person.email, detail: 'by link' }, transaction);
      await outbox.put(passwordChangedLetter(person), transaction);
      return sessions.endAllOf(person.id, 'password reset', transaction);
    });
    sessions.announce(ended);
    void outbox.dispatch();
  }

  /** What an invitation says. The address is empty in the link that makes the first admin: they give their own. */
  async lookAtInvitation(token: string): Promise<Invitation> {
    const row = await findToken(token, ['invitation', 'first-admin'], this.now());
    if (!row) refuseToken('Ask an admin for a new one.');
    const expiresAt = row.expiresAt.toISOString();
    if (row.purpose === 'first-admin')
      return { email: '', name: '', roles: [...FIRST_ADMIN_ROLES], invitedBy: 'this server', expiresAt };
    const person = await Person.findByPk(row.personId ?? '', { include: ['roleRows'] });
    if (person?.state !== 'invited') refuseToken('Ask an admin for a new one.');
    return {
      email: person.email,
      name: person.name,
      roles: rolesOf(person),
      invitedBy: row.issuedBy ?? 'an admin',
      expiresAt,
    };
  }

  /** Accepts an invitation. `email` is for the first admin alone. */
  async acceptInvitation(
    { token, name, password, email }: { token: string; name: string; password: string; email?: string },
    caller: Caller,
  ): Promise<void> {
    refuseCommon(password);
    const invitation = await this.lookAtInvitation(token);
    const address = (invitation.email || email || '').toLowerCase();
    if (address === '')
      throw new InputError(
        'The first admin gives an e-mail address.',
        [{ pointer: '/email', detail: 'An e-mail address is missing.' }],
        422,
      );
    const passwordHash = await this.parts.hasher.hash(password);
    await this.parts.desk.write(async (transaction) => {
      const row = await findToken(token, ['invitation', 'first-admin'], this.now(), transaction);
      if (!row) refuseToken('Ask an admin for a new one.');
      const person = row.personId
        ? await Person.findByPk(row.personId, { transaction })
        : await makeFirstAdmin(address, name, this.now(), transaction);
      if (person?.state !== 'invited') refuseToken('Ask an admin for a new one.');
      await withdrawTokens(row.personId, [row.purpose], this.now(), transaction);
      await person.update({ name, passwordHash, state: 'active' }, { transaction });
      const by = { actor: { id: person.id, name }, address: caller.address };
      await this.parts.audit.record({ by, action: 'accepted the invitation', subject: person.email }, transaction);
    });
  }

  /** Work that the answer does not wait for, one piece after another; what it put into the outbox is sent. */
  private afterwards(work: (transaction: Transaction) => Promise<void>): void {
    this.behind = this.behind.then(async () => {
      try {
        await this.parts.desk.write(work);
        void this.parts.outbox.dispatch();
      } catch (error) {
        this.parts.logger.error({ err: error }, 'work after an answer failed');
      }
    });
  }

  /** Resolves when all work after answers is done. */
  idle(): Promise<void> {
    return this.behind;
  }
}

/** Whoever sets the desk up may also try it. */
export const FIRST_ADMIN_ROLES = ['modeller', 'admin'] as const;

async function makeFirstAdmin(email: string, name: string, now: Date, transaction: Transaction): Promise<Person> {
  if (await Person.findOne({ where: { email }, transaction }))
    throw new ConflictError(`Somebody with the address ${email} is here already.`);
  const id = randomUUID();
  const row = { id, email, name, state: 'invited' as const, passwordHash: null, createdAt: now };
  const person = await Person.create(row, { transaction });
  await PersonRole.bulkCreate(
    FIRST_ADMIN_ROLES.map((role) => ({ personId: id, role })),
    { transaction },
  );
  return person;
}

function refuseCommon(password: string): void {
  if (!isCommonPassword(password)) return;
  const detail =
    'This password is among the first that anybody would try. Choose another, a few unrelated words perhaps.';
  throw new InputError(detail, [{ pointer: '/password', detail }], 422);
}

function refuseToken(advice: string): never {
  const detail = `This link is no longer good: it was used, replaced, or is too old. ${advice}`;
  throw new RefusedError(422, 'This link does not open anything now', detail, [{ pointer: '/token', detail }]);
}
