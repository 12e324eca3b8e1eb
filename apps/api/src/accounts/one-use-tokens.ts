import { createHash, randomBytes } from 'node:crypto';
import { OneUseToken, type TokenPurpose } from '@halfdeep/store';
import { Op, type Transaction } from 'sequelize';

/** A fresh secret of 256 random bits, base64url. */
export const freshToken = () => randomBytes(32).toString('base64url');
/** What the database keeps of a secret. Plain SHA-256 does for 256 random bits: there is nothing to guess. */
export const hashToken = (token: string) => createHash('sha256').update(token).digest('hex');

const HOUR_MS = 3600_000;
/** How long a link is good. */
export const TOKEN_LIFE_MS: Record<TokenPurpose, number> = {
  reset: HOUR_MS,
  invitation: 7 * 24 * HOUR_MS,
  'first-admin': 24 * HOUR_MS,
};

/** Makes a token and withdraws the earlier ones of the same person and purpose. Returns the secret, which is kept nowhere. */
export async function issueToken(
  purpose: TokenPurpose,
  personId: string | null,
  issuedBy: string | null,
  now: Date,
  transaction: Transaction,
): Promise<string> {
  await withdrawTokens(personId, [purpose], now, transaction);
  const token = freshToken();
  const expiresAt = new Date(now.getTime() + TOKEN_LIFE_MS[purpose]);
  const row = { hash: hashToken(token), purpose, personId, createdAt: now, expiresAt, usedAt: null, issuedBy };
  await OneUseToken.create(row, { transaction });
  return token;
}

/** The token if it is good now; null when it is unknown, used, withdrawn or expired. */
export function findToken(
  token: string,
  purposes: readonly TokenPurpose[],
  now: Date,
  transaction?: Transaction,
): Promise<OneUseToken | null> {
  const where = { hash: hashToken(token), purpose: [...purposes], usedAt: null, expiresAt: { [Op.gt]: now } };
  return OneUseToken.findOne({ where, transaction });
}

/** Makes a person's unused tokens of these purposes useless. */
export async function withdrawTokens(
  personId: string | null,
  purposes: readonly TokenPurpose[],
  now: Date,
  transaction: Transaction,
): Promise<void> {
  const where = { personId, purpose: [...purposes], usedAt: null };
  await OneUseToken.update({ usedAt: now }, { where, transaction });
}
