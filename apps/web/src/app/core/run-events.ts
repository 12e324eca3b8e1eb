import { HttpClient } from '@angular/common/http';
import { Injectable, InjectionToken, inject, signal } from '@angular/core';
import { progressSchema, queueSummarySchema, runSummarySchema, type HalfdeepEvent } from '@halfdeep/contracts';
import {
  Observable,
  Subject,
  type Subscription,
  catchError,
  filter,
  finalize,
  map,
  of,
  share,
  switchMap,
  take,
  timer,
} from 'rxjs';
import * as z from 'zod';

/** How the one event stream of this tab stands. `idle`: nothing is watched. */
export type Connection = 'idle' | 'connecting' | 'open' | 'lost';

/** Makes the browser's EventSource; specs put their own in its place. */
export const EVENT_SOURCE = new InjectionToken<(url: string) => EventSource>('EVENT_SOURCE', {
  providedIn: 'root',
  factory: () => (url) => new EventSource(url),
});

const FIRST_WAIT_MS = 1000;
const LONGEST_WAIT_MS = 30_000;
/** Watches that begin together (a page opening) make one connection, not several. */
const GATHER_MS = 50;

const recordsSchema = progressSchema.shape.records;
const PAYLOADS = {
  state: z.object({ run: runSummarySchema }),
  progress: z.object({ runId: z.string(), progress: progressSchema }),
  records: z.object({ runId: z.string(), records: recordsSchema }),
  queue: z.object({ queue: queueSummarySchema }),
} as const;
type EventType = keyof typeof PAYLOADS;
const TYPES = Object.keys(PAYLOADS) as EventType[];

/** One event of the wire, or null when its text is not what the contract says. */
export function parseEvent(type: EventType, text: string): HalfdeepEvent | null {
  let json: unknown;
  try {
    json = JSON.parse(text);
  } catch (error) {
    if (error instanceof SyntaxError) return null;
    throw error;
  }
  const parsed = PAYLOADS[type].safeParse(json);
  return parsed.success ? ({ ...parsed.data, type } as HalfdeepEvent) : null;
}

/** Milliseconds before try `attempt` (0, 1, …): doubling to 30 s, spread by a quarter so that tabs do not march in step. */
export function waitBefore(attempt: number, random = Math.random()): number {
  return Math.min(LONGEST_WAIT_MS, FIRST_WAIT_MS * 2 ** attempt) * (0.75 + 0.5 * random);
}

/**
 * One server-sent stream a tab for everything that any screen watches. Watermarks come through it, never
 * payloads: whoever hears `reopened` asks for the present state again and has missed nothing.
 */
@Injectable({ providedIn: 'root' })
export class RunEvents {
  private readonly open = inject(EVENT_SOURCE);
  private readonly http = inject(HttpClient);
  private readonly heard = new Subject<HalfdeepEvent>();
  private readonly reopenings = new Subject<void>();
  private readonly watched = new Map<string, number>();
  private queueWatchers = 0;
  private source: EventSource | null = null;
  private sourceKey: string | null = null;
  private pending: Subscription | null = null;
  private attempt = 0;
  private everOpen = false;

  readonly connection = signal<Connection>('idle');
  /** Each time the stream opens again after a loss or with another set of runs. */
  readonly reopened: Observable<void> = this.reopenings.asObservable();

  /** State of the queue, as it changes. */
  readonly queue = new Observable<HalfdeepEvent & { type: 'queue' }>((subscriber) => {
    this.queueWatchers++;
    this.schedule(GATHER_MS);
    return this.heard
      .pipe(
        filter((event) => event.type === 'queue'),
        finalize(() => {
          this.queueWatchers--;
          this.schedule(GATHER_MS);
        }),
      )
      .subscribe(subscriber);
  }).pipe(
    map((event) => event.queue),
    share(),
  );

  /** Events of one run for as long as somebody is subscribed. */
  watch(runId: string): Observable<HalfdeepEvent> {
    return new Observable<HalfdeepEvent>((subscriber) => {
      this.watched.set(runId, (this.watched.get(runId) ?? 0) + 1);
      this.schedule(GATHER_MS);
      return this.heard
        .pipe(
          filter((event) =>
            event.type === 'state' ? event.run.id === runId : event.type !== 'queue' && event.runId === runId,
          ),
          finalize(() => {
            const left = (this.watched.get(runId) ?? 1) - 1;
            if (left > 0) this.watched.set(runId, left);
            else this.watched.delete(runId);
            this.schedule(GATHER_MS);
          }),
        )
        .subscribe(subscriber);
    });
  }

  /** Try now instead of waiting for the next turn. */
  reconnect(): void {
    this.attempt = 0;
    this.sourceKey = null;
    this.schedule(0);
  }

  private schedule(afterMs: number): void {
    this.pending?.unsubscribe();
    this.pending = timer(afterMs).subscribe(() => this.settle());
  }

  private settle(): void {
    const key = [...this.watched.keys()].sort().join(',');
    if (this.watched.size === 0 && this.queueWatchers === 0) {
      this.close();
      this.connection.set('idle');
      this.everOpen = false;
      return;
    }
    if (key === this.sourceKey && this.source !== null) return;
    this.connect(key);
  }

  private connect(key: string): void {
    this.close();
    if (this.connection() !== 'lost') this.connection.set('connecting');
    const source = this.open(`/api/events?runs=${encodeURIComponent(key)}`);
    this.source = source;
    this.sourceKey = key;
    source.onopen = () => {
      this.attempt = 0;
      this.connection.set('open');
      if (this.everOpen) this.reopenings.next();
      this.everOpen = true;
    };
    source.onerror = () => this.lose(source);
    for (const type of TYPES)
      source.addEventListener(type, (message: MessageEvent<string>) => {
        const event = parseEvent(type, message.data);
        if (event) this.heard.next(event);
      });
  }

  // The browser cannot see why a stream ended. Asking who we are first lets the session renew itself, or end.
  private lose(source: EventSource): void {
    if (source !== this.source) return;
    this.close();
    this.connection.set('lost');
    this.pending?.unsubscribe();
    this.pending = timer(waitBefore(this.attempt++))
      .pipe(
        switchMap(() => this.http.get('/api/me').pipe(catchError(() => of(null)))),
        take(1),
      )
      .subscribe(() => this.settle());
  }

  private close(): void {
    this.source?.close();
    this.source = null;
    this.sourceKey = null;
  }
}
