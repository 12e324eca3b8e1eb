import { Location } from '@angular/common';
import { Injectable, inject } from '@angular/core';

/**
 * The one-use token of a mailed link ("/reset#…", "/reset#token=…" or "/reset?token=…"), taken out of the address at
 * once: it must not stay in the history, in a screenshot, or in what the browser sends on.
 */
@Injectable({ providedIn: 'root' })
export class AddressToken {
  private readonly location = inject(Location);

  /** The token, or null when the address carries none. */
  take(): string | null {
    const [beforeHash = '', hash = ''] = this.location.path(true).split('#', 2);
    const [path = '', query = ''] = beforeHash.split('?', 2);
    const fromHash = hash.includes('=') ? new URLSearchParams(hash).get('token') : decodeURIComponent(hash);
    const token = fromHash || new URLSearchParams(query).get('token');
    if (!token) return null;
    this.location.replaceState(path);
    return token;
  }
}
