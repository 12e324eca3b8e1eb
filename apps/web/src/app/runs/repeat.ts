import { type RunSummary } from '@halfdeep/contracts';
import { type Verdict } from '@halfdeep/ocean';

/** Whether a run is another run's setup computed once more: made from it, with nothing changed. */
export function isRepeat(run: Pick<RunSummary, 'descent' | 'changes' | 'parentLabel'>): boolean {
  return run.descent === 'sensitivity' && run.changes.length === 0 && run.parentLabel !== null;
}

/** What the fingerprints of a run and of its repeat say together. */
export interface RepeatVerdict {
  /** Null while one of the two has none yet. */
  verdict: Verdict | null;
  text: string;
}

type Ended = Pick<RunSummary, 'label' | 'fingerprint'>;

/** Holds a repeat against the run that it repeats; `original` null: it is gone. */
export function repeatVerdict(repeat: Ended, original: Ended | null): RepeatVerdict {
  if (!original)
    return { verdict: null, text: 'The run that it repeats is gone: there is nothing to hold it against.' };
  const [first, second] = [original.fingerprint, repeat.fingerprint];
  if (!first) return { verdict: null, text: `${original.label} has no fingerprint to hold this one against.` };
  if (!second) return { verdict: null, text: `To be held against ${original.label} when it has finished.` };
  const core = `another core version (${first.coreVersion} then, ${second.coreVersion} now)`;
  if (first.coreVersion === second.coreVersion)
    return first.sha256 === second.sha256
      ? { verdict: 'pass', text: `verified: same to the last bit as ${original.label}` }
      : { verdict: 'refuse', text: `differs from ${original.label}, though setup and core version are the same` };
  return first.sha256 === second.sha256
    ? { verdict: 'pass', text: `verified: same to the last bit as ${original.label}, by ${core}` }
    : {
        verdict: 'caution',
        text: `${core} than that of ${original.label}: the bits may differ, so this neither verifies nor fails it`,
      };
}
