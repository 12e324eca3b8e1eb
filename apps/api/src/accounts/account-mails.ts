import { type Role } from '@halfdeep/contracts';
import { type Letter } from '../mail/outbox';

const list = (words: readonly string[]) =>
  words.length < 2 ? (words[0] ?? 'none') : `${words.slice(0, -1).join(', ')} and ${words.at(-1) ?? ''}`;
const ADVICE = 'If you did not expect this, tell an admin of your desk.';

interface Addressee {
  name: string;
  email: string;
}

export function resetLetter({ name, email }: Addressee, link: string): Letter {
  const body =
    `Hello ${name},\n\nsomebody, we hope you, asked for a new password for your account at Halfdeep. Choose it here, ` +
    `within an hour:\n\n{link}\n\nThe link works once. If it was not you, nothing has changed: leave this mail alone.\n`;
  return { to: email, subject: 'Choose a new password', body, link };
}

export function passwordChangedLetter({ name, email }: Addressee): Letter {
  const body =
    `Hello ${name},\n\nyour password at Halfdeep was changed with a link that we mailed to you. Every session was ` +
    `ended; sign in with the new password.\n\n${ADVICE}\n`;
  return { to: email, subject: 'Your password was changed', body };
}

export function invitationLetter({ name, email }: Addressee, by: string, roles: readonly Role[], link: string): Letter {
  const body =
    `Hello ${name},\n\n${by} invites you to the group's desk at Halfdeep, as ${list(roles)}. Accept within seven ` +
    `days:\n\n{link}\n\nThe link works once. If you do not know what this is about, leave this mail alone.\n`;
  return { to: email, subject: 'An invitation to Halfdeep', body, link };
}

export function rolesChangedLetter({ name, email }: Addressee, by: string, roles: readonly Role[]): Letter {
  const body =
    `Hello ${name},\n\n${by} changed your roles at Halfdeep. You are now ${list(roles)}. Every session was ended; ` +
    `sign in again.\n\n${ADVICE}\n`;
  return { to: email, subject: 'Your roles were changed', body };
}

export function deactivatedLetter({ name, email }: Addressee, by: string): Letter {
  const body =
    `Hello ${name},\n\n${by} deactivated your account at Halfdeep. You can no longer sign in; your experiments stay ` +
    `where they are.\n\n${ADVICE}\n`;
  return { to: email, subject: 'Your account was deactivated', body };
}

export function reactivatedLetter({ name, email }: Addressee, by: string): Letter {
  const body = `Hello ${name},\n\n${by} opened your account at Halfdeep again: you can sign in as before.\n\n${ADVICE}\n`;
  return { to: email, subject: 'Your account is open again', body };
}
