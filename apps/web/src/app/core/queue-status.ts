import { Injectable, effect, inject, signal } from '@angular/core';
import type { QueueSummary } from '@halfdeep/contracts';
import type { Subscription } from 'rxjs';
import { RunEvents } from './run-events';
import { Session } from './session';

/** "2 of 3 places computing"; while work beyond a lowered cap still runs to its end, "2 computing, the cap is 1". */
export function placesInWords(running: number, cap: number): string {
  if (running > cap) return `${running} computing, the cap is ${cap}`;
  return `${running} of ${cap} ${cap === 1 ? 'place' : 'places'} computing`;
}

/** How many places compute, for the sign in the head: from the event stream, and from whatever reads the queue. */
@Injectable({ providedIn: 'root' })
export class QueueStatus {
  private readonly session = inject(Session);
  private readonly events = inject(RunEvents);
  private readonly latest = signal<QueueSummary | null>(null);
  private listening: Subscription | null = null;
  /** Null until the first answer, and after the session has ended. */
  readonly summary = this.latest.asReadonly();

  constructor() {
    effect(() => (this.session.signedIn() ? this.listen() : this.fall()));
  }

  take(summary: QueueSummary): void {
    this.latest.set(summary);
  }

  private listen(): void {
    this.listening ??= this.events.queue.subscribe((summary) => this.latest.set(summary));
  }

  private fall(): void {
    this.listening?.unsubscribe();
    this.listening = null;
    this.latest.set(null);
  }
}
