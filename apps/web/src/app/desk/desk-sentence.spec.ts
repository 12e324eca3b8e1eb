import type { Desk, RunSummary } from '@halfdeep/contracts';
import { aDesk, aRun } from '../testing/samples';
import { deskSentence } from './desk-sentence';
import { queueLine, startsWhen } from './waiting-time';

const said = (desk: Desk) =>
  deskSentence(desk)
    .map((phrase) => phrase.text)
    .join('');
const at = (seconds: number | null): RunSummary =>
  aRun({ state: 'running', progress: { ...aRun().progress, secondsLeft: seconds } });

describe('deskSentence', () => {
  it('says what ended, what computes and what waits', () => {
    const desk = aDesk({
      ended: [
        aRun({ label: 'Control', state: 'finished' }),
        aRun({ label: 'Weak', state: 'finished' }),
        aRun({
          id: '00000000-0000-4000-8000-000000000077',
          label: 'No drag',
          state: 'failed',
          progress: { ...aRun().progress, day: 212 },
        }),
      ],
      running: [at(60), at(90)],
      waiting: [aRun()],
    });
    expect(said(desk)).toBe('Two runs finished. No drag failed at day 212. Two runs are computing, one waits.');
  });

  it('links the one run that it names', () => {
    const phrases = deskSentence(
      aDesk({ ended: [aRun({ id: '00000000-0000-4000-8000-000000000077', label: 'Weak', state: 'finished' })] }),
    );
    expect(phrases[0]).toEqual({ text: 'Weak', runId: '00000000-0000-4000-8000-000000000077' });
    expect(phrases.map((phrase) => phrase.text).join('')).toBe('Weak finished. Nothing is computing.');
  });

  it('takes the few that ended earlier for no news', () => {
    const desk = aDesk({ recent: true, ended: [aRun({ state: 'finished' })], running: [at(60)] });
    expect(said(desk)).toBe('Nothing has ended since you last looked. One run is computing.');
  });

  it('names on a first visit the run that ended last, without calling all of them news', () => {
    const ended = [aRun({ label: 'Weak', state: 'finished' }), aRun({ label: 'Control', state: 'finished' })];
    const desk = aDesk({ since: null, recent: true, ended });
    expect(said(desk)).toBe('The last to end was Weak. Nothing is computing.');
    expect(said({ ...desk, running: [at(60)] })).toBe('The last to end was Weak. One run is computing.');
  });

  it('says on a first visit to an empty desk that nothing computes yet', () => {
    expect(said(aDesk({ since: null }))).toBe('Nothing is computing yet.');
  });
});

describe('waiting time', () => {
  const full = (over: Partial<Desk> = {}) =>
    aDesk({ queue: { cap: 2, paused: false, running: 2, waiting: 3 }, running: [at(360), at(120)], ...over });

  it('says when the next place frees', () => {
    expect(queueLine(full())).toBe('Queue open. A place frees in about 2\u00a0min');
    expect(queueLine(full({ running: [at(null), at(null)] }))).toBe('Queue open. Every place computes.');
    expect(queueLine(aDesk())).toBe('Queue open. 3 places are free.');
    expect(queueLine(full({ queue: { cap: 2, paused: true, running: 2, waiting: 3 } }))).toContain('paused');
  });

  it('says when a run starts as far as that is known', () => {
    const waits = (place: number) => aRun({ state: 'queued', queuePosition: place });
    expect(startsWhen(waits(1), full())).toBe('starts in about 2\u00a0min');
    expect(startsWhen(waits(2), full())).toBe('starts in about 6\u00a0min');
    expect(startsWhen(waits(3), full())).toBe('place 3 in the queue');
    expect(startsWhen(waits(1), aDesk())).toBe('starts next');
  });
});
