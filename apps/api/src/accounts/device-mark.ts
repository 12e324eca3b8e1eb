import { createHmac, randomBytes, timingSafeEqual } from 'node:crypto';

const signature = (email: string, id: string, key: string) =>
  createHmac('sha256', key).update(`${id} ${email}`).digest('base64url');

/** A mark for a browser that has signed in to an account: it says so to nobody but us, and for no other account. */
export function makeDeviceMark(email: string, key: string): string {
  const id = randomBytes(16).toString('base64url');
  return `${id}.${signature(email, id, key)}`;
}

/** The mark's id when it is ours and of this account; null otherwise. */
export function readDeviceMark(mark: string | undefined, email: string, key: string): string | null {
  const [id, signed] = mark?.split('.') ?? [];
  if (!id || !signed) return null;
  const [given, right] = [Buffer.from(signed), Buffer.from(signature(email, id, key))];
  return given.length === right.length && timingSafeEqual(given, right) ? id : null;
}
