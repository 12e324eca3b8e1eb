import jwt from 'jsonwebtoken';
import { type SignOptions } from 'jsonwebtoken';

/** What an access token says: whose it is and of which session. Roles are read afresh at each request. */
export interface AccessClaims {
  sub: string;
  sid: string;
}
export const ISSUER = 'halfdeep';
export const ALGORITHM = 'HS256';

/** Signs an access token that lives for `lifeS` seconds. */
export function signAccess({ sub, sid }: AccessClaims, key: string, lifeS: number, now: Date): string {
  const iat = Math.floor(now.getTime() / 1000);
  const options: SignOptions = { algorithm: ALGORITHM, issuer: ISSUER };
  return jwt.sign({ sub, sid, iat, exp: iat + lifeS }, key, options);
}
