import { HttpClient } from '@angular/common/http';
import { Injectable, computed, inject, signal } from '@angular/core';
import { Router } from '@angular/router';
import { type Me, type Role, meSchema, sessionSchema } from '@halfdeep/contracts';
import { type Observable, catchError, defer, finalize, firstValueFrom, map, of, shareReplay, throwError } from 'rxjs';
import { Api } from './api';
import { ApiProblem } from './problem';

/** Who sits at this desk. The tokens live in cookies that no script can read; this service knows the person alone. */
@Injectable({ providedIn: 'root' })
export class Session {
  private readonly api = inject(Api);
  private readonly http = inject(HttpClient);
  private readonly router = inject(Router);
  private readonly person = signal<Me | null>(null);
  private first: Promise<Me | null> | null = null;
  private refreshing: Observable<boolean> | null = null;

  readonly me = this.person.asReadonly();
  readonly signedIn = computed(() => this.person() !== null);

  has(role: Role): boolean {
    return this.person()?.roles.includes(role) ?? false;
  }

  /** Asks the server once who this is; null when nobody is signed in. Rejects when the server does not answer. */
  whoAmI(): Promise<Me | null> {
    this.first ??= firstValueFrom(
      this.api
        .get('/api/me', meSchema)
        .pipe(
          catchError((error: unknown) =>
            error instanceof ApiProblem && error.status === 401 ? of(null) : throwError(() => error),
          ),
        ),
    ).then(
      (me) => {
        this.person.set(me);
        return me;
      },
      (error: unknown) => {
        this.first = null; // the next page asks again
        throw error;
      },
    );
    return this.first;
  }

  signIn(email: string, password: string): Observable<Me> {
    return this.api.post('/api/session', { email, password }, sessionSchema).pipe(
      map(({ me }) => {
        this.first = Promise.resolve(me);
        this.person.set(me);
        return me;
      }),
    );
  }

  /** Ends the session on the server, then here; the page is left even when the server is gone. */
  async signOut(): Promise<void> {
    try {
      await firstValueFrom(this.api.send('DELETE', '/api/session'));
    } catch (error) {
      // Already ended is what was wanted; anything else must be seen, since the session still lives.
      if (!(error instanceof ApiProblem && error.status === 401)) throw error;
    }
    this.forget();
    await this.router.navigateByUrl('/sign-in');
  }

  /** Trades the refresh cookie for a new access cookie; one trade at a time. False: the session has ended. */
  refresh(): Observable<boolean> {
    this.refreshing ??= defer(() => this.http.post('/api/session/refresh', {}, { responseType: 'text' })).pipe(
      map(() => true),
      catchError(() => of(false)),
      finalize(() => (this.refreshing = null)),
      shareReplay({ bufferSize: 1, refCount: true }),
    );
    return this.refreshing;
  }

  /** The server no longer knows this session: keep the address, ask to sign in. */
  ended(): void {
    const hadOne = this.signedIn();
    this.forget();
    if (hadOne) void this.router.navigate(['/sign-in'], { queryParams: { next: this.router.url } });
  }

  private forget(): void {
    this.first = Promise.resolve(null);
    this.person.set(null);
  }
}
