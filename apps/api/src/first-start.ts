import { randomInt, randomUUID } from 'node:crypto';
import { ROLES, type Role } from '@halfdeep/contracts';
import { Person, PersonRole } from '@halfdeep/store';
import { isCommonPassword } from './accounts/common-password';
import { issueToken } from './accounts/one-use-tokens';
import { type Services } from './compose-services';

/** A demonstration account as the first start prints it. */
export interface DemoSignIn {
  email: string;
  password: string;
  role: Role;
}

/** What the operator is told on standard output. */
export interface FirstStartNews {
  /** Accounts that were made, or given the operator's password, by this start. */
  signIns: DemoSignIn[];
  /** The link that makes the first admin; null when there is one. */
  firstAdminLink: string | null;
}

/** The demonstration's people are named after their role. */
const NAMES: Record<Role, string> = { modeller: 'Modeller', reviewer: 'Reviewer', admin: 'Admin' };
const addressOf = (role: Role) => `${role}@halfdeep.example`;
/** Owns the demonstration's experiment. */
export const DEMO_MODELLER = addressOf('modeller');

/**
 * Makes sure that somebody can sign in: the demonstration accounts at the first start, or a link for the first admin as
 * long as nobody has accepted one.
 */
export async function prepareAccounts(services: Services): Promise<FirstStartNews> {
  if (services.demonstration) return { signIns: await demoAccounts(services), firstAdminLink: null };
  return { signIns: [], firstAdminLink: await firstAdminLink(services) };
}

async function demoAccounts({ desk, hasher, audit, settings, sessions }: Services): Promise<DemoSignIn[]> {
  const made: DemoSignIn[] = [];
  for (const role of ROLES) {
    const email = addressOf(role);
    const there = await Person.findOne({ where: { email } });
    // Later starts leave the accounts alone, unless the operator names a password: that is how a lost one is replaced.
    if (there && settings.demoPassword === null) continue;
    if (there && (await hasher.matches(settings.demoPassword ?? '', there.passwordHash))) continue;
    const password = settings.demoPassword ?? randomPassword();
    const passwordHash = await hasher.hash(password);
    const ended = await desk.write(async (transaction) => {
      const action = there ? 'set a demonstration password' : 'made a demonstration account';
      await audit.record({ by: null, action, subject: email }, transaction);
      if (there) {
        await there.update({ passwordHash }, { transaction });
        return sessions.endAllOf(there.id, 'password reset', transaction);
      }
      const row = { id: randomUUID(), email, name: NAMES[role], state: 'active' as const, createdAt: new Date() };
      const person = await Person.create({ ...row, passwordHash }, { transaction });
      await PersonRole.create({ personId: person.id, role }, { transaction });
      return [];
    });
    sessions.announce(ended);
    made.push({ email, password, role });
  }
  return made;
}

async function firstAdminLink({ desk, audit, publicUrl }: Services): Promise<string | null> {
  return desk.write(async (transaction) => {
    if ((await Person.count({ transaction })) > 0) return null;
    const token = await issueToken('first-admin', null, null, new Date(), transaction);
    await audit.record({ by: null, action: 'made a link', subject: 'the first admin' }, transaction);
    return `${publicUrl()}/invitation#${token}`;
  });
}

// Without letters and digits that look alike.
const LETTERS = 'abcdefghjkmnpqrstuvwxyz23456789';

/** Sixteen random letters and digits in groups of four: 79 bits. */
function randomPassword(): string {
  for (;;) {
    const letters = Array.from({ length: 16 }, () => LETTERS[randomInt(LETTERS.length)]).join('');
    const password = letters.match(/.{4}/g)?.join('-') ?? letters;
    if (!isCommonPassword(password)) return password;
  }
}
