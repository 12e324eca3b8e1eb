import { changesAbove, descentOf, outcomeBelow, shareDone } from './descent';

const run = (id: string, parentRunId: string | null, minute: number) => ({
  id,
  parentRunId,
  createdAt: `2026-03-01T10:${String(minute).padStart(2, '0')}:00Z`,
});
const change = (label: string) => ({ pointer: '/x', label, from: '1.00', to: '1.20', unit: '' });
const progress = {
  step: 50,
  startStep: 0,
  totalSteps: 100,
  day: 1277.5,
  totalDays: 2555,
  cellStepsPerSecond: null,
  secondsLeft: null,
  records: { frames: 0, sections: 0, moorings: 0, budget: 0 },
  savedStep: null,
  cautions: [],
};

describe('descentOf', () => {
  it('hangs children under their parent, elder first, and keeps orphans as roots', () => {
    const roots = descentOf([
      run('weak', 'control', 3),
      run('strong', 'control', 2),
      run('control', null, 1),
      run('x', 'gone', 0),
    ]);
    expect(roots.map(({ id }) => id)).toEqual(['x', 'control']);
    expect(roots[1].children.map(({ id }) => id)).toEqual(['strong', 'weak']);
  });
  it('does not follow a ring for ever', () => {
    expect(descentOf([run('a', 'b', 1), run('b', 'a', 2), run('c', null, 3)])).toEqual([{ id: 'c', children: [] }]);
  });
});

describe('what stands at a course line', () => {
  it('names three changes, and two of more', () => {
    const of = (count: number) =>
      changesAbove({ descent: 'sensitivity', changes: Array.from({ length: count }, (_, k) => change(`c${k}`)) });
    expect(of(3)).toEqual(['c0 1.00 → 1.20', 'c1 1.00 → 1.20', 'c2 1.00 → 1.20']);
    expect(of(5)).toEqual(['c0 1.00 → 1.20', 'c1 1.00 → 1.20', 'and 3 more']);
    expect(of(0)).toEqual(['the same setup']);
  });
  it('tells how far it came', () => {
    const at = { progress, failure: null, queuePosition: null, queuedReason: null, startedAt: null, endedAt: null };
    expect(outcomeBelow({ ...at, state: 'running' })).toBe('year 3.50 of 7');
    expect(outcomeBelow({ ...at, state: 'finished' })).toBe('7 years');
    const times = { startedAt: '2026-03-01T10:00:00Z', endedAt: '2026-03-01T10:00:46Z' };
    expect(outcomeBelow({ ...at, ...times, state: 'finished' })).toBe('7 years, 46\u00a0s from start to end');
    expect(outcomeBelow({ ...at, state: 'queued', queuePosition: 2, queuedReason: 'cap lowered' })).toBe(
      'place 2 in the queue, cap lowered',
    );
    const failure = {
      cause: 'non-finite',
      message: 'It blew up.',
      step: 9,
      day: 212,
      place: null,
      lastGoodStep: 8,
    } as const;
    expect(outcomeBelow({ ...at, state: 'failed', failure })).toBe('at day 212: It blew up.');
    expect(shareDone({ progress })).toBe(0.5);
  });
});
