import { randomBytes } from 'node:crypto';
import { chmodSync, mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import * as z from 'zod';

const key = z.string().regex(/^[A-Za-z0-9_-]{43}$/);
const secretsSchema = z.object({
  /** Signs access tokens. */
  accessKey: key,
  /** Signs the cookie by which a browser is known again. */
  deviceKey: key,
  /** Seals the links of mails that wait in the outbox. */
  linkKey: key,
});
/** 32 random bytes each, base64url. */
export type Secrets = z.infer<typeof secretsSchema>;

/** Fresh secrets, each of 32 random bytes. */
export function makeSecrets(): Secrets {
  const fresh = () => randomBytes(32).toString('base64url');
  return { accessKey: fresh(), deviceKey: fresh(), linkKey: fresh() };
}

/** Reads var/secrets.json, or makes it at the first start, readable by its owner alone. Removing it signs everybody out. */
export function openSecrets(varFolder: string): Secrets {
  mkdirSync(varFolder, { recursive: true });
  const path = join(varFolder, 'secrets.json');
  try {
    writeFileSync(path, `${JSON.stringify(makeSecrets(), null, 2)}\n`, { flag: 'wx', mode: 0o600 });
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code !== 'EEXIST') throw error;
    chmodSync(path, 0o600); // copied about, it may have become readable
  }
  try {
    return secretsSchema.parse(JSON.parse(readFileSync(path, 'utf8')));
  } catch (error) {
    throw new Error(`${path} does not hold this server's secrets. Remove it: everybody then signs in anew.`, {
      cause: error,
    });
  }
}
