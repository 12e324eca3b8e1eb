import { randomUUID } from 'node:crypto';
import { ROLES, type Page, type PageQuery, type Person as PersonDto, type Role } from '@halfdeep/contracts';
import { Person, PersonRole, type DeskDatabase } from '@halfdeep/store';
import { col, fn, type Order, type Transaction } from 'sequelize';
import { deactivatedLetter, invitationLetter, reactivatedLetter, rolesChangedLetter } from '../accounts/account-mails';
import { issueToken, withdrawTokens } from '../accounts/one-use-tokens';
import { rolesOf } from '../accounts/roles-of';
import { type AccessRevoked, type SessionService } from '../accounts/session-service';
import { type AuditTrail } from '../audit/audit-trail';
import { ConflictError, ForbiddenError, InputError, NotFoundError } from '../http/errors';
import { containing } from '../http/list';
import { type Outbox } from '../mail/outbox';
import { type Actor, type Caller } from '../policy/actor';

/** A caller who is signed in. */
export type SignedInCaller = Caller & { actor: Actor };

export interface PeopleParts {
  desk: DeskDatabase;
  sessions: SessionService;
  outbox: Outbox;
  audit: AuditTrail;
  publicUrl: () => string;
  now?: () => Date;
}

const SORTS: Record<string, Order> = {
  name: [[fn('lower', col('name')), 'ASC']],
  email: [['email', 'ASC']],
  createdAt: [['createdAt', 'ASC']],
  '-createdAt': [['createdAt', 'DESC']],
  lastSeenAt: [['lastSeenAt', 'ASC']],
  '-lastSeenAt': [['lastSeenAt', 'DESC']],
};

const sameRoles = (a: readonly Role[], b: readonly Role[]) =>
  ROLES.every((role) => a.includes(role) === b.includes(role));
const inWords = (roles: readonly Role[]) => ROLES.filter((role) => roles.includes(role)).join(', ');

/** Who may sign in, and as what: the admin's side of it. */
export class PeopleService {
  private readonly now: () => Date;

  constructor(private readonly parts: PeopleParts) {
    this.now = parts.now ?? (() => new Date());
  }

  /** By name unless `sort` says otherwise (a leading minus turns it round); `q` searches name and address. */
  async list({ page, pageSize, q, sort = 'name' }: PageQuery): Promise<Page<PersonDto>> {
    const order = SORTS[sort];
    if (!order) {
      const detail = `People are sorted by ${Object.keys(SORTS).join(', ')}; “${sort}” arrived.`;
      throw new InputError(detail, [{ pointer: '/sort', detail }]);
    }
    const where = q ? containing(q, ['name', 'email', 'state']) : {};
    const total = await Person.count({ where });
    const rows = await Person.findAll({ where, order, limit: pageSize, offset: (page - 1) * pageSize });
    const roles = await PersonRole.findAll({ where: { personId: rows.map((row) => row.id) } });
    for (const row of rows) row.roleRows = roles.filter((role) => role.personId === row.id);
    return { items: rows.map(toDto), page, pageSize, total };
  }

  /** Invites somebody by mail, or again when they have not accepted yet: then the earlier link is withdrawn. */
  async invite(who: { email: string; name: string; roles: Role[] }, by: SignedInCaller): Promise<PersonDto> {
    const email = who.email.toLowerCase();
    const invited = await this.parts.desk.write(async (transaction) => {
      await refuseFormerAdmin(by, transaction);
      const known = await Person.findOne({ where: { email }, transaction });
      if (known && known.state !== 'invited')
        throw new ConflictError(
          known.state === 'active'
            ? `${known.name} (${email}) has an account already.`
            : `${known.name} (${email}) has an account, which is deactivated: open it again instead.`,
        );
      const person =
        known ??
        (await Person.create(
          { id: randomUUID(), email, name: who.name, state: 'invited', passwordHash: null, createdAt: this.now() },
          { transaction },
        ));
      await person.update({ name: who.name }, { transaction });
      await setRoles(person.id, who.roles, transaction);
      await this.sendInvitation(person, who.roles, by, known ? 'invited again' : 'invited', transaction);
      return find(person.id, transaction);
    });
    void this.parts.outbox.dispatch();
    return toDto(invited);
  }

  private async sendInvitation(
    person: Person,
    roles: readonly Role[],
    by: SignedInCaller,
    action: string,
    transaction: Transaction,
  ): Promise<void> {
    const { audit, outbox, publicUrl } = this.parts;
    const token = await issueToken('invitation', person.id, by.actor.name, this.now(), transaction);
    const letter = invitationLetter(person, by.actor.name, roles, `${publicUrl()}/invitation#${token}`);
    await outbox.put(letter, transaction);
    await audit.record({ by, action, subject: person.email, detail: inWords(roles) }, transaction);
  }

  /**
   * Changes roles, closes or opens an account. What is lost is lost at once: sessions, event streams, mailed links. Throws
   * ConflictError when the last active admin would go, or when admins would close their own account.
   */
  async change(
    personId: string,
    { roles, active }: { roles?: Role[]; active?: boolean },
    by: SignedInCaller,
  ): Promise<PersonDto> {
    const { changed, ended } = await this.parts.desk.write(async (transaction) => {
      await refuseFormerAdmin(by, transaction);
      const person = await find(personId, transaction);
      const over: AccessRevoked[] = [];
      if (roles && !sameRoles(roles, rolesOf(person)))
        over.push(...(await this.giveRoles(person, roles, by, transaction)));
      if (active === false && person.state !== 'deactivated') over.push(...(await this.close(person, by, transaction)));
      if (active === true && person.state === 'deactivated') await this.open(person, by, transaction);
      return { changed: await find(personId, transaction), ended: over };
    });
    this.parts.sessions.announce(ended);
    void this.parts.outbox.dispatch();
    return toDto(changed);
  }

  private async giveRoles(
    person: Person,
    roles: readonly Role[],
    by: SignedInCaller,
    transaction: Transaction,
  ): Promise<AccessRevoked[]> {
    const { audit, outbox, sessions } = this.parts;
    if (!roles.includes('admin')) await refuseLastAdmin(person, 'keeps the role admin', transaction);
    const before = rolesOf(person);
    await setRoles(person.id, roles, transaction);
    const detail = `from ${inWords(before)} to ${inWords(roles)}`;
    await audit.record({ by, action: 'changed roles', subject: person.email, detail }, transaction);
    if (person.state !== 'active') return [];
    await withdrawTokens(person.id, ['reset'], this.now(), transaction);
    await outbox.put(rolesChangedLetter(person, by.actor.name, roles), transaction);
    return sessions.endAllOf(person.id, 'roles changed', transaction);
  }

  private async close(person: Person, by: SignedInCaller, transaction: Transaction): Promise<AccessRevoked[]> {
    const { audit, outbox, sessions } = this.parts;
    if (person.id === by.actor.id)
      throw new ConflictError('You cannot deactivate your own account; ask another admin to do it.');
    await refuseLastAdmin(person, 'stays active', transaction);
    const wasActive = person.state === 'active';
    await person.update({ state: 'deactivated' }, { transaction });
    await withdrawTokens(person.id, ['reset', 'invitation'], this.now(), transaction);
    const detail = wasActive ? '' : 'the invitation was withdrawn';
    await audit.record({ by, action: 'deactivated', subject: person.email, detail }, transaction);
    if (wasActive) await outbox.put(deactivatedLetter(person, by.actor.name), transaction);
    return sessions.endAllOf(person.id, 'deactivated', transaction);
  }

  private async open(person: Person, by: SignedInCaller, transaction: Transaction): Promise<void> {
    const { audit, outbox } = this.parts;
    if (person.passwordHash === null) {
      await person.update({ state: 'invited' }, { transaction });
      await this.sendInvitation(person, rolesOf(await find(person.id, transaction)), by, 'invited again', transaction);
      return;
    }
    await person.update({ state: 'active' }, { transaction });
    await audit.record({ by, action: 'reactivated', subject: person.email }, transaction);
    await outbox.put(reactivatedLetter(person, by.actor.name), transaction);
  }
}

async function find(id: string, transaction: Transaction): Promise<Person> {
  const person = await Person.findByPk(id, { include: ['roleRows'], transaction });
  if (!person) throw new NotFoundError(`Nobody here has the id ${id}.`);
  return person;
}

async function setRoles(personId: string, roles: readonly Role[], transaction: Transaction): Promise<void> {
  await PersonRole.destroy({ where: { personId }, transaction });
  await PersonRole.bulkCreate(
    [...new Set(roles)].map((role) => ({ personId, role })),
    { transaction },
  );
}

/**
 * Whoever was an admin when the request arrived may have lost that while it waited for its turn: a right that was just
 * taken must not be given back by its former holder.
 */
async function refuseFormerAdmin({ actor }: SignedInCaller, transaction: Transaction): Promise<void> {
  const sender = await Person.findByPk(actor.id, { include: ['roleRows'], transaction });
  if (sender?.state !== 'active' || !rolesOf(sender).includes('admin'))
    throw new ForbiddenError('You are no longer an admin: that was changed while this request waited.');
}

/** Somebody must remain who can invite people and open accounts. */
async function refuseLastAdmin(person: Person, mustWhat: string, transaction: Transaction): Promise<void> {
  if (person.state !== 'active' || !rolesOf(person).includes('admin')) return;
  const admins = await Person.count({
    where: { state: 'active' },
    include: [{ association: 'roleRows', where: { role: 'admin' }, required: true }],
    distinct: true,
    transaction,
  });
  if (admins <= 1)
    throw new ConflictError(
      `${person.name} is the only active admin and ${mustWhat}; make somebody else an admin first.`,
    );
}

function toDto(person: Person): PersonDto {
  const { id, name, email, state, createdAt, lastSeenAt } = person;
  const seen = lastSeenAt?.toISOString() ?? null;
  return { id, name, email, roles: rolesOf(person), state, createdAt: createdAt.toISOString(), lastSeenAt: seen };
}
