import { type CookieOptions, type Request, type Response } from 'express';
import { REFRESH_LIFE_MS, type SessionTokens } from './session-service';

export const ACCESS_COOKIE = 'halfdeep_access';
export const REFRESH_COOKIE = 'halfdeep_refresh';
const DEVICE_COOKIE = 'halfdeep_device';
const YEAR_MS = 365 * 24 * 3600_000;

/** Cookies that no script can read and no other site can send. `secure` when the desk is reached over HTTPS. */
export class SessionCookies {
  constructor(private readonly secure: boolean) {}

  private options(path: string, maxAge?: number): CookieOptions {
    return { httpOnly: true, sameSite: 'strict', secure: this.secure, path, ...(maxAge && { maxAge }) };
  }

  /** The refresh token travels to the session's own addresses alone. */
  set(res: Response, { access, accessExpiresAt, refresh }: SessionTokens, now: Date): void {
    res.cookie(ACCESS_COOKIE, access, this.options('/api', accessExpiresAt.getTime() - now.getTime()));
    res.cookie(REFRESH_COOKIE, refresh, this.options('/api/session', REFRESH_LIFE_MS));
  }

  clear(res: Response): void {
    res.clearCookie(ACCESS_COOKIE, this.options('/api'));
    res.clearCookie(REFRESH_COOKIE, this.options('/api/session'));
  }

  setDevice(res: Response, mark: string): void {
    res.cookie(DEVICE_COOKIE, mark, this.options('/api/session', YEAR_MS));
  }

  refreshOf(req: Request): string | undefined {
    return read(req, REFRESH_COOKIE);
  }

  deviceOf(req: Request): string | undefined {
    return read(req, DEVICE_COOKIE);
  }
}

function read(req: Request, name: string): string | undefined {
  const value = (req.cookies as Record<string, unknown> | undefined)?.[name];
  return typeof value === 'string' && value !== '' ? value : undefined;
}
