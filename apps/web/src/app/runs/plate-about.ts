import { type RunSummary } from '@halfdeep/contracts';
import { formatModelTime } from '../core/format';

/** Lines that a saved plate and its data carry: which run, of which question, how far, which core. */
export function plateAbout(run: RunSummary): string[] {
  const core = run.fingerprint ? `, core ${run.fingerprint.coreVersion}, fingerprint ${run.fingerprint.sha256}` : '';
  return [
    run.label,
    `Experiment: ${run.question}`,
    `Run ${run.id}, ${run.state}, ${formatModelTime(run.progress.day, run.progress.totalDays)}${core}`,
  ];
}
