import { describe, expect, it } from 'vitest';
import { fairPlace, wantedOrder, type WaitingRun } from './fair-order';

/** Queues runs one by one, named owner + number, and says in which order they wait. */
function queueUp(owners: string, running: Record<string, number> = {}): string {
  const waiting: WaitingRun[] = [];
  const count = new Map<string, number>();
  for (const ownerId of owners) {
    const n = (count.get(ownerId) ?? 0) + 1;
    count.set(ownerId, n);
    const place = fairPlace(waiting, ownerId, new Map(Object.entries(running)));
    waiting.splice(place, 0, { id: `${ownerId}${n}`, ownerId });
  }
  return waiting.map((run) => run.id).join(' ');
}

describe('fairPlace', () => {
  it('keeps one owner’s runs in the order they came', () => expect(queueUp('aaa')).toBe('a1 a2 a3'));
  it('lets a newcomer’s first run before another’s second', () => expect(queueUp('aaab')).toBe('a1 b1 a2 a3'));
  it('alternates between two who queued many at once', () => expect(queueUp('aaabbb')).toBe('a1 b1 a2 b2 a3 b3'));
  it('counts the runs that compute now as turns taken', () => {
    expect(queueUp('ab', { a: 2 })).toBe('b1 a1');
    expect(queueUp('aab', { b: 1 })).toBe('a1 a2 b1');
  });
  it('never places a run before another of the same owner, whatever an admin did', () => {
    const waiting = [
      { id: 'a9', ownerId: 'a' },
      { id: 'a1', ownerId: 'a' },
      { id: 'b1', ownerId: 'b' },
    ];
    expect(fairPlace(waiting, 'b', new Map())).toBe(3);
    expect(fairPlace(waiting, 'c', new Map())).toBe(3);
    expect(fairPlace(waiting.slice(0, 2), 'c', new Map())).toBe(1);
  });
});

describe('wantedOrder', () => {
  it('puts the named first and keeps the rest behind them', () =>
    expect(wantedOrder(['1', '2', '3', '4'], ['3', '1'])).toEqual(['3', '1', '2', '4']));
  it('passes over ids that do not wait and repeats', () =>
    expect(wantedOrder(['1', '2'], ['9', '2', '2'])).toEqual(['2', '1']));
});
