import { HttpErrorResponse, type HttpInterceptorFn } from '@angular/common/http';
import { inject } from '@angular/core';
import { catchError, switchMap, throwError } from 'rxjs';
import { Session } from './session';

/** Requests that speak about the session itself, or need none: a 401 there is their answer. */
const OPEN = /^\/api\/(session|password-resets|invitations)(\/|\?|$)/;

/** An expired access cookie is refreshed once and the request sent again; when that fails, the session has ended. */
export const refreshOn401: HttpInterceptorFn = (request, next) => {
  if (!request.url.startsWith('/api/') || OPEN.test(request.url)) return next(request);
  const session = inject(Session);
  return next(request).pipe(
    catchError((error: unknown) => {
      if (!(error instanceof HttpErrorResponse) || error.status !== 401) return throwError(() => error);
      return session.refresh().pipe(
        switchMap((fresh) => {
          if (fresh) return next(request);
          session.ended();
          return throwError(() => error);
        }),
      );
    }),
  );
};
