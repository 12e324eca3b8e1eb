import { Location } from '@angular/common';
import { Injectable, type Signal, inject, signal } from '@angular/core';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { NavigationEnd, NavigationSkipped, Router } from '@angular/router';
import { filter } from 'rxjs';

/**
 * The one-use token of a mailed link ("/reset#…", "/reset#token=…" or "/reset?token=…"), taken out of the address at
 * once: it must not stay in the history, in a screenshot, or in what the browser sends on.
 */
@Injectable({ providedIn: 'root' })
export class AddressToken {
  private readonly location = inject(Location);
  private readonly router = inject(Router);

  /**
   * In an injection context: the token of the address, null while it carries none. A link that is opened in the same tab
   * changes no more than the part behind the #, and is taken up too.
   */
  follow(): Signal<string | null> {
    // Not told apart by value: the same link opened once more is news, too.
    const token = signal(this.take(), { equal: () => false });
    this.router.events
      .pipe(
        filter((event) => event instanceof NavigationEnd || event instanceof NavigationSkipped),
        takeUntilDestroyed(),
      )
      .subscribe(() => {
        const taken = this.take();
        if (taken) token.set(taken);
      });
    return token.asReadonly();
  }

  private take(): string | null {
    const [beforeHash = '', hash = ''] = this.location.path(true).split('#', 2);
    const [path = '', query = ''] = beforeHash.split('?', 2);
    const fromHash = hash.includes('=') ? new URLSearchParams(hash).get('token') : decodeURIComponent(hash);
    const token = fromHash || new URLSearchParams(query).get('token');
    if (!token) return null;
    this.location.replaceState(path);
    return token;
  }
}
