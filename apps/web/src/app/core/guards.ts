import { inject } from '@angular/core';
import { type CanActivateFn, RedirectCommand, Router, type UrlTree } from '@angular/router';
import type { Me, Role } from '@halfdeep/contracts';
import { ApiProblem } from './problem';
import { Session } from './session';

/** Signed in, or on to the sign-in page with the way back in the address. */
export const signedIn: CanActivateFn = (_route, state) =>
  knowing(state.url, (me, router) => {
    if (me !== null) return true;
    return router.createUrlTree(['/sign-in'], state.url === '/' ? {} : { queryParams: { next: state.url } });
  });

/** Holds the role; the API refuses all the same, this only spares a page of refusals. */
export function holds(role: Role): CanActivateFn {
  return (_route, state) =>
    knowing(state.url, (me, router) => (me?.roles.includes(role) ?? false) || router.createUrlTree(['/not-yours']));
}

/** The sign-in page is no place for somebody who is in. */
export const signedOut: CanActivateFn = (_route, state) =>
  knowing(state.url, (me, router) => me === null || router.createUrlTree(['/']));

/** Asks who this is first. A server that does not answer gets a page that says so and tries again, at the same address. */
async function knowing(url: string, decide: (me: Me | null, router: Router) => boolean | UrlTree) {
  const [session, router] = [inject(Session), inject(Router)];
  try {
    return decide(await session.whoAmI(), router);
  } catch (error) {
    if (!(error instanceof ApiProblem)) throw error;
    return new RedirectCommand(router.parseUrl('/unreachable'), {
      skipLocationChange: true,
      state: { problem: error.detail || error.title, url },
    });
  }
}
