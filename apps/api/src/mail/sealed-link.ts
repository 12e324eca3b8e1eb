import { createCipheriv, createDecipheriv, randomBytes } from 'node:crypto';

const CIPHER = 'aes-256-gcm';
const NONCE_BYTES = 12;
const TAG_BYTES = 16;

/**
 * A link as the database may hold it while its mail waits: AES-256-GCM under a key that lies beside the database, not in
 * it. Blanking a row is not enough, since SQLite's log keeps what a row once said.
 */
export function sealLink(link: string, key: string): string {
  const nonce = randomBytes(NONCE_BYTES);
  const cipher = createCipheriv(CIPHER, Buffer.from(key, 'base64url'), nonce);
  return Buffer.concat([nonce, cipher.update(link, 'utf8'), cipher.final(), cipher.getAuthTag()]).toString('base64url');
}

/** The link; null when it was sealed under another key. */
export function openLink(sealed: string, key: string): string | null {
  const bytes = Buffer.from(sealed, 'base64url');
  const decipher = createDecipheriv(CIPHER, Buffer.from(key, 'base64url'), bytes.subarray(0, NONCE_BYTES));
  decipher.setAuthTag(bytes.subarray(-TAG_BYTES));
  try {
    return decipher.update(bytes.subarray(NONCE_BYTES, -TAG_BYTES), undefined, 'utf8') + decipher.final('utf8');
  } catch {
    return null; // the tag does not fit: the secrets were made anew since
  }
}
