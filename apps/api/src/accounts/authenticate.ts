import { type Request, type RequestHandler } from 'express';
import passport from 'passport';
import { ExtractJwt, Strategy } from 'passport-jwt';
import { type Actor, type Caller } from '../policy/actor';
import { ALGORITHM, ISSUER, type AccessClaims } from './access-token';
import { ACCESS_COOKIE } from './cookies';
import { type SessionService } from './session-service';

const fromCookie = (req: Request) =>
  (req.cookies as Record<string, string | undefined> | undefined)?.[ACCESS_COOKIE] ?? null;

/**
 * Finds out who asks, by bearer token (scripts) or cookie (browsers), and whether their session still lives. Nobody is an
 * answer too: the policy table decides what nobody may do.
 */
export function authenticate(sessions: SessionService, accessKey: string): RequestHandler {
  const authenticator = new passport.Passport();
  const options = {
    jwtFromRequest: ExtractJwt.fromExtractors([ExtractJwt.fromAuthHeaderAsBearerToken(), fromCookie]),
    secretOrKey: accessKey,
    algorithms: [ALGORITHM as 'HS256'],
    issuer: ISSUER,
  };
  authenticator.use(
    'access',
    new Strategy(options, (claims: AccessClaims, done) => {
      sessions.identify(claims).then(
        (actor) => done(null, actor ?? false),
        (error: unknown) => done(error, false),
      );
    }),
  );
  return (req, res, next) => {
    const known = (error: unknown, actor: Actor | false | null | undefined) => {
      if (error) {
        next(error);
        return;
      }
      res.locals['caller'] = { actor: actor || null, address: req.ip ?? 'unknown' } satisfies Caller;
      next();
    };
    (authenticator.authenticate('access', { session: false }, known) as RequestHandler)(req, res, next);
  };
}
