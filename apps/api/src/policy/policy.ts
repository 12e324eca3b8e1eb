import { ConflictError, ForbiddenError, UnauthenticatedError } from '../http/errors';
import { type Actor, type PolicySubject } from './actor';
import { ACTIONS, POLICY_TABLE, type Action, type PolicyRow } from './policy-table';

/** The table's rows for one action. Throws when there is none: an action nobody thought about is not allowed to exist. */
export function policyRows(action: Action): readonly PolicyRow[] {
  const rows = POLICY_TABLE.filter((row) => row[0] === action);
  if (rows.length === 0 || !(action in ACTIONS))
    throw new Error(`The policy table has no row for “${action}”: say who may do it before routing it.`);
  return rows;
}

/** Whether the decision depends on whose the thing is or on its state. */
export function needsSubject(action: Action): boolean {
  return policyRows(action).some(([, , whose, states]) => whose === 'own' || states !== 'any');
}

/** Whether anybody at all may do it, signed in or not. */
export function isOpen(action: Action): boolean {
  return policyRows(action).some(([, who]) => who === 'anyone');
}

const fitsRole = (actor: Actor | null, [, who]: PolicyRow) =>
  who === 'anyone' || (actor !== null && (who === 'signed in' || actor.roles.includes(who)));
const fitsOwner = (actor: Actor | null, [, , whose]: PolicyRow, subject: PolicySubject) =>
  whose === 'any' || (actor !== null && subject.ownerId === actor.id);
const fitsState = ([, , , states]: PolicyRow, subject: PolicySubject) =>
  states === 'any' || (subject.state !== undefined && states.includes(subject.state));

const either = (words: readonly string[]) =>
  words.length < 2 ? (words[0] ?? '') : `${words.slice(0, -1).join(', ')} or ${words.at(-1) ?? ''}`;

/** First half: does this person's role admit them at all? Throws 401 or 403. */
export function authoriseRole(actor: Actor | null, action: Action): void {
  const rows = policyRows(action);
  if (rows.some((row) => fitsRole(actor, row))) return;
  if (!actor) throw new UnauthenticatedError();
  const roles = [...new Set(rows.map(([, who]) => who))];
  const have = actor.roles.length > 0 ? either(actor.roles).replace(' or ', ' and ') : 'none';
  throw new ForbiddenError(`You may not ${ACTIONS[action]}: that takes the role ${either(roles)}; yours: ${have}.`);
}

/** The whole decision on one thing. Throws 401, 403 (role or owner) or 409 (its state). */
export function authorise(actor: Actor | null, action: Action, subject: PolicySubject): void {
  authoriseRole(actor, action);
  const own = policyRows(action).filter((row) => fitsRole(actor, row) && fitsOwner(actor, row, subject));
  if (own.length === 0)
    throw new ForbiddenError(`You may not ${ACTIONS[action]}: only the owner of the experiment may.`);
  if (own.some((row) => fitsState(row, subject))) return;
  const states = [...new Set(own.flatMap(([, , , allowed]) => (allowed === 'any' ? [] : allowed)))];
  throw new ConflictError(
    `You may not ${ACTIONS[action]} now: the ${subject.noun ?? 'thing'} is ${subject.state ?? 'in no known state'}; it must be ${either(states)}.`,
  );
}

/** The same decision as a yes or no, for the `can` of summaries. */
export function can(actor: Actor | null, action: Action, subject: PolicySubject = {}): boolean {
  return policyRows(action).some(
    (row) => fitsRole(actor, row) && fitsOwner(actor, row, subject) && fitsState(row, subject),
  );
}
