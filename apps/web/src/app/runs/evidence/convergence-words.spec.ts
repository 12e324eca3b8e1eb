import { aRun } from '../../testing/samples';
import {
  convergenceSummary,
  costOf,
  firstChoice,
  indexWords,
  measureVerdict,
  openChoice,
  repeatFact,
  sectionName,
} from './convergence-words';
import { aConvergence, aLevel, aMeasure } from './testing';

const id = (n: number) => `00000000-0000-4000-8000-${String(n).padStart(12, '0')}`;
const print = (sha256: string, coreVersion = '1') => ({ sha256, coreVersion, shape: [1, 1, 1, 1, 1, 1] });

describe('convergenceSummary', () => {
  it('names the largest index when every transport is in the asymptotic range', () => {
    const worse = aMeasure({ gci: { own: { amount: 0.3, share: 0.06 }, twice: { amount: 0.1, share: 0.02 } } });
    expect(convergenceSummary([aMeasure(), worse])).toEqual({
      verdict: 'pass',
      text: 'in the asymptotic range; largest grid convergence index of this run 6.0\u00a0%',
    });
  });
  it('never passes what is not in the asymptotic range', () => {
    const measures = [aMeasure(), aMeasure({ verdict: 'not monotone' }), aMeasure({ verdict: 'order out of range' })];
    expect(convergenceSummary(measures)).toEqual({
      verdict: 'caution',
      text: 'two transports of 3 are not in the asymptotic range',
    });
    expect(convergenceSummary([aMeasure(), aMeasure({ verdict: 'line moved' })]).verdict).toBe('caution');
    expect(measureVerdict({ verdict: 'not monotone' })).toEqual({ verdict: 'caution', text: 'not monotone' });
  });
  it('passes three grids that agree', () => {
    const equal = aMeasure({ verdict: 'equal', order: null, gci: null });
    expect(convergenceSummary([equal])).toEqual({ verdict: 'pass', text: 'the three grids agree' });
  });
});

it('an index has a per cent where its value is something', () => {
  expect(indexWords({ amount: 0.0123, share: 0.0022 })).toBe('0.012\u00a0Sv, 0.22\u00a0%');
  expect(indexWords({ amount: 0.0123, share: null })).toBe('0.012\u00a0Sv');
});

describe('what is left to queue', () => {
  it('costs both, the one that is missing, or nothing', () => {
    const run = aRun();
    expect(costOf([aLevel('half'), aLevel('twice')])).toEqual({
      seconds: 472,
      diskBytes: 340e6,
      cells: 120 * 70 + 480 * 280,
    });
    expect(costOf([aLevel('half', { run, plan: null }), aLevel('twice')])?.seconds).toBe(460);
    expect(costOf([aLevel('half', { run, plan: null }), aLevel('twice', { run, plan: null })])).toBeNull();
  });
  it('shows the coast that is farthest first', () => {
    const convergence = aConvergence();
    expect(firstChoice(convergence)).toBe('same');
    convergence.choices[1].levels[0].run = aRun();
    expect(firstChoice(convergence)).toBe('anew');
  });
});

it('a section is named once', () => {
  expect(sectionName({ name: 'Equator', along: 'latitude', atDeg: 0 })).toBe('Equator, 0°');
  expect(sectionName({ name: '5° N', along: 'latitude', atDeg: 5 })).toBe('5°\u00a0N');
  expect(sectionName({ name: '', along: 'longitude', atDeg: 20.25 })).toBe('20.25°\u00a0E');
});

it('a dialog opens at a coast that has something left to queue', () => {
  const run = aRun();
  const convergence = aConvergence();
  expect(openChoice(convergence, 'anew')).toBe('anew');
  for (const level of convergence.choices[1].levels) level.run = run;
  expect(openChoice(convergence, 'anew')).toBe('same');
  for (const level of convergence.choices[0].levels) level.run = run;
  expect(openChoice(convergence, 'anew')).toBe('anew');
});

describe('repeatFact', () => {
  const run = aRun({ id: id(1), label: 'Control', descent: 'control', parentRunId: null, fingerprint: print('ab') });
  const repeat = (n: number, over: Parameters<typeof aRun>[0]) =>
    aRun({ id: id(n), label: `Repeat ${n}`, parentRunId: id(1), parentLabel: 'Control', changes: [], ...over });

  it('takes the latest repeat that has ended', () => {
    const all = [
      run,
      repeat(2, { createdAt: '2026-12-01T06:00:00.000Z', fingerprint: print('cd') }),
      repeat(3, { createdAt: '2026-12-01T07:00:00.000Z', fingerprint: print('ab') }),
      repeat(4, { createdAt: '2026-12-01T08:00:00.000Z', fingerprint: null, state: 'running' }),
      aRun({ id: id(5), parentRunId: id(1) }), // another setup
    ];
    expect(repeatFact(run, all)).toEqual({
      verdict: 'pass',
      text: 'the same to the last bit as',
      other: { id: id(3), label: 'Repeat 3' },
    });
    expect(repeatFact(run, all.slice(0, 2)).verdict).toBe('refuse');
    expect(repeatFact(run, [run, repeat(2, { fingerprint: print('cd', '2') })]).verdict).toBe('caution');
  });
  it('waits for one that is still computing, and says when there is none', () => {
    expect(repeatFact(run, [run, repeat(4, { state: 'running' })])).toMatchObject({
      verdict: null,
      other: { id: id(4) },
    });
    expect(repeatFact(run, [run])).toEqual({
      verdict: null,
      text: 'Nobody has computed it a second time yet.',
      other: null,
    });
  });
  it('holds a repeat against the run that it repeats', () => {
    const again = repeat(2, { fingerprint: print('ab') });
    expect(repeatFact(again, [run, again])).toMatchObject({ verdict: 'pass', other: { id: id(1), label: 'Control' } });
  });
});
