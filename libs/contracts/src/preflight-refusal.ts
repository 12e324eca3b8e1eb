import type { Check, Preflight } from '@halfdeep/ocean';
import type { FieldError } from './field-errors';

/** Why a setup is not let in: one sentence for all, and one line a field with the change that cures it. */
export interface PreflightRefusal {
  detail: string;
  errors: FieldError[];
}

/**
 * What preflight refuses, in the words of the API and of the headless command; null when it refuses nothing. `place`
 * says where in what arrived a field of the setup stands, as a JSON pointer.
 */
export function preflightRefusal(answer: Preflight, place: (pointer: string) => string): PreflightRefusal | null {
  if (answer.verdict !== 'refuse') return null;
  const refused = answer.checks.filter((check) => check.verdict === 'refuse');
  return {
    detail: `Preflight refuses this setup: ${refused.map((check) => check.reason).join(' ')}`,
    errors: refused.flatMap((check) => checkErrors(check, place)),
  };
}

/** One line a field that the check is about: the reason, and the change that cures it. */
function checkErrors(check: Check, place: (pointer: string) => string): FieldError[] {
  const cure = check.remedy
    ? ` ${check.remedy.label}: ${check.remedy.changes
        .map(({ pointer, value }) => `${place(pointer)} = ${JSON.stringify(value)}`)
        .join(', ')}.`
    : '';
  const places = new Set(check.pointers.map(place));
  return [...places].map((pointer) => ({ pointer, detail: `${check.reason}${cure}` }));
}
