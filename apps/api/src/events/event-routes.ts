import { type HalfdeepEvent } from '@halfdeep/contracts';
import { Run } from '@halfdeep/store';
import { type Response, Router } from 'express';
import { filter, interval, last, map, merge, type Observable, share, take, takeUntil, timer } from 'rxjs';
import * as z from 'zod';
import { type AccessRevoked } from '../accounts/session-service';
import { route } from '../http/route';
import { type Actor } from '../policy/actor';
import { type EventHub } from './event-hub';

export interface EventRouteServices {
  events: EventHub;
  /** Sessions that end; their streams end with them. */
  accessRevoked$: Observable<AccessRevoked>;
  failed: (error: unknown) => void;
}

/** Proxies and browsers give up on a silent connection. */
const HEARTBEAT_MS = 15_000;
const RETRY_MS = 2000;
/** Runs that one tab may watch. */
const MOST_RUNS = 100;
/** A reader that is this far behind is let go; it comes back and asks how things stand. */
const MOST_WAITING_BYTES = 1 << 20;
/** The longest time that a timer can hold, ms; a session that lives longer is asked again by the next connection. */
const LONGEST_TIMER_MS = 2 ** 31 - 1;

const query = z.object({
  runs: z
    .string()
    .default('')
    .transform((text) => [...new Set(text.split(',').filter((id) => id !== ''))])
    .pipe(
      z
        .array(z.uuid('Runs are named by their ids, separated by commas.'))
        .max(MOST_RUNS, `One stream watches at most ${MOST_RUNS} runs.`),
    ),
});

/** /events: one server-sent stream for everything that a tab watches. */
export function eventRoutes(services: EventRouteServices): Router {
  const router = Router();
  route(
    router,
    {
      method: 'get',
      path: '/events',
      action: 'events.watch',
      summary:
        'Server-sent events state, progress, records (of ?runs=a,b) and queue. Begins, with or without Last-Event-ID, ' +
        'with how everything stands, so that nothing is missed; leaves out runs that are gone; ends with the session',
      query,
      media: 'text/event-stream',
    },
    async ({ query: { runs }, actor, res }) => {
      // A run that was deleted in another tab must not end the stream for everything else that this one watches.
      const there = new Set((await Run.findAll({ where: { id: runs }, attributes: ['id'] })).map((run) => run.id));
      const known = runs.filter((id) => there.has(id));
      stream(res, services, services.events.watch(actor, known), actor);
    },
  );
  return router;
}

/** Ids tell streams of one server apart from those of another, and grow. */
const server = Date.now().toString(36);
let sent = 0;

/** One event as it goes over the wire. Its JSON has no line breaks. */
export function frameOf(event: HalfdeepEvent, id: string): string {
  return `id: ${id}\nevent: ${event.type}\ndata: ${JSON.stringify(event)}\n\n`;
}

function stream(res: Response, services: EventRouteServices, events: Observable<HalfdeepEvent>, actor: Actor): void {
  // no-transform keeps compression, which would hold events back, away from the stream.
  res.set({ 'Cache-Control': 'no-cache, no-transform', 'X-Accel-Buffering': 'no' });
  res.type('text/event-stream').write(`retry: ${RETRY_MS}\n\n`);
  res.flushHeaders();
  const expired = Math.max(0, Math.min(actor.sessionExpiresAt.getTime() - Date.now(), LONGEST_TIMER_MS));
  const ended = merge(
    timer(expired),
    services.accessRevoked$.pipe(filter((revoked) => revoked.sessionId === actor.sessionId)),
  ).pipe(take(1));
  const lines = events.pipe(
    map((event) => frameOf(event, `${server}-${++sent}`)),
    share(),
  );
  // When the events end, so does the beat, and with both the stream.
  const beat = interval(HEARTBEAT_MS).pipe(
    map(() => ': beat\n\n'),
    takeUntil(lines.pipe(last(null, null))),
  );
  const finish = () => {
    if (!res.writableEnded) res.end();
  };
  const writing = merge(beat, lines)
    .pipe(takeUntil(ended))
    .subscribe({
      next: (chunk) => {
        res.write(chunk);
        if (res.writableLength > MOST_WAITING_BYTES) finish();
      },
      error: (error) => {
        services.failed(error);
        finish();
      },
      complete: finish,
    });
  res.once('close', () => writing.unsubscribe());
}
