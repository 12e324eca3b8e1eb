import { HttpClient, HttpErrorResponse } from '@angular/common/http';
import { Injectable, computed, inject, signal } from '@angular/core';
import { Router } from '@angular/router';
import { type Me, type Role, meSchema, sessionSchema } from '@halfdeep/contracts';
import { type Observable, catchError, defer, finalize, firstValueFrom, map, of, shareReplay, throwError } from 'rxjs';
import { Api } from './api';
import { keepText, keptText } from './kept';
import { ApiProblem } from './problem';

/** Name of the lock and of the moment of the last trade. */
const TRADE = 'halfdeep.refreshed';

/** Who sits at this desk. The tokens live in cookies that no script can read; this service knows the person alone. */
@Injectable({ providedIn: 'root' })
export class Session {
  private readonly api = inject(Api);
  private readonly http = inject(HttpClient);
  private readonly router = inject(Router);
  private readonly person = signal<Me | null>(null);
  private first: Promise<Me | null> | null = null;
  private refreshing: Observable<boolean> | null = null;

  private readonly broken = signal(false);

  readonly me = this.person.asReadonly();
  /** The server ended the session under a page that was open: its reader deserves to know why they are asked to sign in. */
  readonly brokenOff = this.broken.asReadonly();
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
        this.broken.set(false);
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

  /**
   * Trades the refresh cookie for new cookies; one trade at a time in this tab, and in all tabs where the browser can lock.
   * False: the session has ended. Errors when the server does not answer.
   */
  refresh(): Observable<boolean> {
    this.refreshing ??= defer(() => this.tradeInTurn()).pipe(
      finalize(() => (this.refreshing = null)),
      shareReplay({ bufferSize: 1, refCount: true }),
    );
    return this.refreshing;
  }

  // A refresh token is good once. Where tabs cannot wait for each other, the server forgives a second use within seconds.
  private async tradeInTurn(): Promise<boolean> {
    const asked = Date.now();
    const locks = (navigator as { locks?: LockManager }).locks; // missing on plain HTTP, save for this machine itself
    if (!locks) return this.trade();
    return locks.request(TRADE, async () => Number(keptText(TRADE) ?? 0) > asked || (await this.trade()));
  }

  private async trade(): Promise<boolean> {
    try {
      await firstValueFrom(this.http.post('/api/session/refresh', {}, { responseType: 'text' }));
    } catch (error) {
      if (error instanceof HttpErrorResponse && error.status === 401) return false;
      throw error;
    }
    keepText(TRADE, String(Date.now()));
    return true;
  }

  /** The server no longer knows this session: keep the address, ask to sign in. */
  ended(): void {
    const hadOne = this.signedIn();
    this.forget();
    this.broken.set(hadOne);
    if (hadOne) void this.router.navigate(['/sign-in'], { queryParams: { next: this.router.url } });
  }

  private forget(): void {
    this.first = Promise.resolve(null);
    this.person.set(null);
  }
}
