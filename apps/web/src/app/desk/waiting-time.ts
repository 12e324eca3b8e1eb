import type { Desk, RunSummary } from '@halfdeep/contracts';
import { formatDuration } from '../core/format';

/** Seconds until each place frees, soonest first; only those that are known. */
function timesLeft(running: readonly RunSummary[]): number[] {
  return running
    .map((run) => run.progress.secondsLeft)
    .filter((seconds) => seconds !== null)
    .sort((a, b) => a - b);
}

/** The line under "Running now": whether work is taken in and when the next place frees. */
export function queueLine(desk: Desk): string {
  const { queue } = desk;
  if (queue.paused) return 'Intake is paused: what runs goes on, what waits stays.';
  const free = queue.cap - queue.running;
  if (free > 0) return `Queue open. ${free === 1 ? 'One place is' : `${free} places are`} free.`;
  const [soonest] = desk.running.length === queue.running ? timesLeft(desk.running) : [];
  return soonest === undefined
    ? 'Queue open. Every place computes.'
    : `Queue open. A place frees in about ${about(soonest)}`;
}

/**
 * When a waiting run is likely to start, from the time left of what computes. Beyond the first round of places nothing is
 * known yet, and the place in the queue is all that is said.
 */
export function startsWhen(run: RunSummary, desk: Desk): string {
  const place = run.queuePosition;
  if (place === null) return '';
  if (desk.queue.paused) return `place ${place}, intake paused`;
  const free = Math.max(0, desk.queue.cap - desk.queue.running);
  if (place <= free) return 'starts next';
  const known = desk.running.length === desk.queue.running ? timesLeft(desk.running) : [];
  const wait = known[place - free - 1];
  return wait === undefined ? `place ${place} in the queue` : `starts in about ${about(wait)}`;
}

function about(seconds: number): string {
  return formatDuration(Math.max(1, seconds), 1);
}
