import type { Desk, RunSummary } from '@halfdeep/contracts';
import { formatCount, formatModelDay, sentenceStart } from '../core/format';

/** A stretch of the opening sentence; with a run it is a link to that run. */
export interface Phrase {
  text: string;
  runId?: string;
}

/**
 * What moved, in one or two plain sentences, from the facts alone: what ended since the last visit, what computes and
 * what waits now. `recent` of the desk means that nothing ended since; then it says so.
 */
export function deskSentence(desk: Desk): Phrase[] {
  const moved = desk.recent ? [] : desk.ended;
  const phrases: Phrase[] = [];
  const say = (text: string, run?: RunSummary) => phrases.push(run ? { text, runId: run.id } : { text });
  const sentence = (begin: () => void) => {
    if (phrases.length) say(' ');
    begin();
    say('.');
  };
  const inState = (state: RunSummary['state']) => moved.filter((run) => run.state === state);

  const finished = inState('finished');
  if (finished.length === 1 && finished[0]) {
    const run = finished[0];
    sentence(() => {
      say(run.label, run);
      say(' finished');
    });
  } else if (finished.length > 1) sentence(() => say(`${sentenceStart(formatCount(finished.length, 'run'))} finished`));

  for (const [state, many] of [
    ['failed', 'failed'],
    ['stopped', 'were stopped'],
  ] as const) {
    const runs = inState(state);
    if (runs.length === 0) continue;
    sentence(() => {
      if (runs.length === 1 && runs[0]) {
        say(`${runs[0].label} ${state === 'failed' ? 'failed' : 'was stopped'}`, runs[0]);
        say(` at ${formatModelDay(runs[0].failure?.day ?? runs[0].progress.day)}`);
      } else say(`${sentenceStart(formatCount(runs.length, 'run'))} ${many}`);
    });
  }

  if (moved.length === 0 && desk.since !== null) sentence(() => say('Nothing has ended since you last looked'));

  const now: string[] = [];
  if (desk.running.length) now.push(`${formatCount(desk.running.length, 'run')} ${are(desk.running)} computing`);
  if (desk.waiting.length) {
    const count = now.length ? countAlone(desk.waiting.length) : formatCount(desk.waiting.length, 'run');
    now.push(`${count} ${desk.waiting.length === 1 ? 'waits' : 'wait'}`);
  }
  const [last] = desk.ended;
  if (desk.since === null && desk.recent && last)
    sentence(() => {
      say('The last to end was ');
      say(last.label, last);
    });
  if (now.length) sentence(() => say(sentenceStart(now.join(', '))));
  else if (desk.ended.length || desk.since !== null) sentence(() => say('Nothing is computing'));
  else if (phrases.length === 0) sentence(() => say('Nothing is computing yet'));
  return phrases;
}

function are(runs: readonly unknown[]): string {
  return runs.length === 1 ? 'is' : 'are';
}

/** "one", "three": the noun stands in the clause before. */
function countAlone(count: number): string {
  return formatCount(count, '', '').trim();
}
