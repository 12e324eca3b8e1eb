import { provideHttpClient } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { TestBed } from '@angular/core/testing';
import { type HalfdeepEvent } from '@halfdeep/contracts';
import { EVENT_SOURCE, RunEvents, parseEvent, waitBefore } from './run-events';

class FakeSource {
  static all: FakeSource[] = [];
  onopen: (() => void) | null = null;
  onerror: (() => void) | null = null;
  closed = false;
  private readonly listeners = new Map<string, (event: MessageEvent<string>) => void>();
  constructor(readonly url: string) {
    FakeSource.all.push(this);
  }
  addEventListener(type: string, listener: (event: MessageEvent<string>) => void): void {
    this.listeners.set(type, listener);
  }
  close(): void {
    this.closed = true;
  }
  say(type: string, data: unknown): void {
    this.listeners.get(type)?.(new MessageEvent(type, { data: JSON.stringify(data) }));
  }
  static get last(): FakeSource {
    const source = FakeSource.all.at(-1);
    if (!source) throw new Error('No stream was opened.');
    return source;
  }
}

const A = '0d5639e7-7e27-4c69-840e-892b6d77a4f2';
const B = '982bc685-a22d-4ff9-a1c0-8a242ba398c2';
const RECORDS = { frames: 3, sections: 15, moorings: 30, budget: 15 };

describe('RunEvents', () => {
  let events: RunEvents;
  let http: HttpTestingController;

  beforeEach(() => {
    vi.useFakeTimers();
    FakeSource.all = [];
    TestBed.configureTestingModule({
      providers: [
        provideHttpClient(),
        provideHttpClientTesting(),
        { provide: EVENT_SOURCE, useValue: (url: string) => new FakeSource(url) },
      ],
    });
    events = TestBed.inject(RunEvents);
    http = TestBed.inject(HttpTestingController);
  });
  afterEach(() => vi.useRealTimers());

  it('opens one stream for all runs that are watched together', () => {
    events.watch(B).subscribe();
    events.watch(A).subscribe();
    events.watch(A).subscribe();
    vi.advanceTimersByTime(100);
    expect(FakeSource.all.length).toBe(1);
    expect(decodeURIComponent(FakeSource.last.url)).toBe(`/api/events?runs=${A},${B}`);
  });

  it('hands each run its own events, and nothing that is not what the contract says', () => {
    const heard: HalfdeepEvent[] = [];
    events.watch(A).subscribe((event) => heard.push(event));
    events.watch(B).subscribe();
    vi.advanceTimersByTime(100);
    FakeSource.last.say('records', { runId: A, records: RECORDS });
    FakeSource.last.say('records', { runId: B, records: RECORDS });
    FakeSource.last.say('records', { runId: A, records: { frames: 'many' } });
    expect(heard).toEqual([{ type: 'records', runId: A, records: RECORDS }]);
  });

  it('asks for less when a run is no longer watched, and closes with the last', () => {
    const first = events.watch(A).subscribe();
    const second = events.watch(B).subscribe();
    vi.advanceTimersByTime(100);
    first.unsubscribe();
    vi.advanceTimersByTime(100);
    expect(FakeSource.all[0]?.closed).toBe(true);
    expect(decodeURIComponent(FakeSource.last.url)).toBe(`/api/events?runs=${B}`);
    second.unsubscribe();
    vi.advanceTimersByTime(100);
    expect(FakeSource.last.closed).toBe(true);
    expect(events.connection()).toBe('idle');
  });

  it('says that it is lost, renews the session, comes back and tells that it did', () => {
    let reopened = 0;
    events.reopened.subscribe(() => reopened++);
    events.watch(A).subscribe();
    vi.advanceTimersByTime(100);
    FakeSource.last.onopen?.();
    expect(events.connection()).toBe('open');
    FakeSource.last.onerror?.();
    expect(events.connection()).toBe('lost');
    vi.advanceTimersByTime(2000);
    http.expectOne('/api/me').flush({});
    expect(FakeSource.all.length).toBe(2);
    expect(events.connection()).toBe('lost');
    FakeSource.last.onopen?.();
    expect(events.connection()).toBe('open');
    expect(reopened).toBe(1);
  });
});

describe('waitBefore', () => {
  it('doubles from a second to half a minute, spread by a quarter either way', () => {
    expect(waitBefore(0, 0.5)).toBe(1000);
    expect(waitBefore(3, 0.5)).toBe(8000);
    expect(waitBefore(20, 0.5)).toBe(30_000);
    expect(waitBefore(0, 0)).toBe(750);
    expect(waitBefore(0, 1)).toBe(1250);
  });
});

describe('parseEvent', () => {
  it('answers null for text that is no event', () => {
    expect(parseEvent('queue', '{')).toBeNull();
    expect(parseEvent('queue', '{"queue":{"cap":2}}')).toBeNull();
    const queue = { cap: 2, paused: false, running: 1, waiting: 0 };
    expect(parseEvent('queue', JSON.stringify({ queue }))).toEqual({ type: 'queue', queue });
  });
});
