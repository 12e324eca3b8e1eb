import {
  invitationLookSchema,
  invitationRedeemSchema,
  invitationSchema,
  meSchema,
  passwordResetRedeemSchema,
  passwordResetRequestSchema,
  sessionSchema,
  signInSchema,
} from '@halfdeep/contracts';
import { Router } from 'express';
import { rateLimit } from 'express-rate-limit';
import * as z from 'zod';
import { TooManyError, UnauthenticatedError } from '../http/errors';
import { route } from '../http/route';
import { type AccountService } from './account-service';
import { SessionCookies } from './cookies';
import { type SessionService } from './session-service';

export interface AccountRouteParts {
  accounts: AccountService;
  sessions: SessionService;
  settings: { https: boolean };
  /** Requests an address may make in a quarter of an hour where a link or an address is all it takes. */
  openRequests?: number;
}

/** `?token=1`: a script wants the access token in the body. */
const tokenQuery = z.object({ token: z.literal('1', 'Only token=1 means anything here.').optional() });
const LINKS = ['/password-resets', '/password-resets/redeem', '/invitations/look', '/invitations/redeem'];
const WINDOW_MS = 15 * 60_000;

export function accountRoutes({ accounts, sessions, settings, openRequests = 60 }: AccountRouteParts): Router {
  const router = Router();
  const cookies = new SessionCookies(settings.https);
  router.use(
    LINKS,
    rateLimit({
      windowMs: WINDOW_MS,
      limit: openRequests,
      legacyHeaders: false,
      standardHeaders: false,
      handler: (_req, _res, next) => {
        next(
          new TooManyError('Too many requests came from here. Try again in a quarter of an hour.', WINDOW_MS / 1000),
        );
      },
    }),
  );

  route(
    router,
    {
      method: 'post',
      path: '/session',
      action: 'session.open',
      summary: 'Sign in. Browsers get cookies; with token=1 the access token is in the body too.',
      query: tokenQuery,
      body: signInSchema,
      answer: sessionSchema,
    },
    async ({ query, body, caller, req, res }) => {
      const forScript = query.token === '1';
      const before = cookies.refreshOf(req);
      const { me, tokens, deviceMark } = await accounts.signIn(body, caller, {
        deviceMark: cookies.deviceOf(req),
        forScript,
      });
      // A browser that signs in anew leaves no forgotten session behind.
      const left = before && (await sessions.ofRefreshToken(before));
      if (left) await sessions.end(left, 'signed in anew');
      res.set('Cache-Control', 'no-store');
      cookies.set(res, tokens, new Date());
      cookies.setDevice(res, deviceMark);
      return forScript ? { me, accessToken: tokens.access, expiresAt: tokens.accessExpiresAt.toISOString() } : { me };
    },
  );

  route(
    router,
    {
      method: 'post',
      path: '/session/refresh',
      action: 'session.refresh',
      summary: 'Trade the refresh cookie for a new access cookie. A refresh token is good once.',
    },
    async ({ caller, req, res }) => {
      const token = cookies.refreshOf(req);
      try {
        if (!token) throw new UnauthenticatedError();
        cookies.set(res, await sessions.refresh(token, caller), new Date());
      } catch (error) {
        if (error instanceof UnauthenticatedError) cookies.clear(res);
        throw error;
      }
    },
  );

  route(
    router,
    { method: 'delete', path: '/session', action: 'session.close', summary: 'Sign out: the session ends at once.' },
    async ({ caller, req, res }) => {
      const token = cookies.refreshOf(req);
      const session = caller.actor?.sessionId ?? (token && (await sessions.ofRefreshToken(token)));
      if (session) await sessions.end(session, 'signed out');
      cookies.clear(res);
    },
  );

  route(
    router,
    { method: 'get', path: '/me', action: 'me.read', summary: 'Who is signed in.', answer: meSchema },
    ({ actor }) => Promise.resolve(accounts.toMe(actor)),
  );

  route(
    router,
    {
      method: 'post',
      path: '/password-resets',
      action: 'password.forget',
      summary: 'Ask for a link to choose a new password. The answer is the same for an address that nobody has.',
      body: passwordResetRequestSchema,
      status: 202,
    },
    ({ body, caller }) => {
      accounts.forgotPassword(body.email, caller);
      return Promise.resolve();
    },
  );

  route(
    router,
    {
      method: 'post',
      path: '/password-resets/redeem',
      action: 'password.reset',
      summary: 'Choose a new password with a mailed link; ends every session of that person.',
      body: passwordResetRedeemSchema,
    },
    async ({ body, caller, res }) => {
      await accounts.resetPassword(body.token, body.password, caller);
      cookies.clear(res);
    },
  );

  route(
    router,
    {
      method: 'post',
      path: '/invitations/look',
      action: 'invitation.look',
      summary: 'What an invitation says.',
      body: invitationLookSchema,
      answer: invitationSchema,
    },
    ({ body }) => accounts.lookAtInvitation(body.token),
  );

  route(
    router,
    {
      method: 'post',
      path: '/invitations/redeem',
      action: 'invitation.accept',
      summary: 'Accept an invitation; then sign in.',
      body: invitationRedeemSchema,
    },
    ({ body, caller }) => accounts.acceptInvitation(body, caller),
  );
  return router;
}
