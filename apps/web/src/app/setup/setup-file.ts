import { isZip, readBundle, SetupFileError, setupSchema } from '@halfdeep/contracts';
import { fieldLabel, stateSha256, type Setup } from '@halfdeep/ocean';
import { toPointer, valueAt } from './setup-pointer';

/** What a file held: a setup that the form can show (some fields may still be refused there), or why not. */
export type SetupFileReading =
  { kind: 'setup'; setup: Setup; label: string | null; refusedFields: number } | { kind: 'refused'; reasons: string[] };

/** Issues that a field of the form can show and cure. */
const CURABLE = new Set(['too_small', 'too_big', 'not_multiple_of', 'custom', 'invalid_format']);
const MOST_REASONS = 6;

/**
 * Reads a setup file as it was opened: JSON, or a bundle, whose state must be the very one that its setup starts from.
 * The state itself stays in the file: the form needs its name alone.
 */
export function readSetupBytes(bytes: Uint8Array): SetupFileReading {
  if (!isZip(bytes)) return readSetupFile(new TextDecoder().decode(bytes));
  try {
    const { text, state } = readBundle(bytes);
    const reading = readSetupFile(text);
    const wrong = reading.kind === 'setup' ? wrongState(reading.setup, state) : null;
    return wrong === null ? reading : { kind: 'refused', reasons: [wrong] };
  } catch (error) {
    if (error instanceof SetupFileError) return { kind: 'refused', reasons: [error.message] };
    throw error;
  }
}

/** What is wrong with the state in a bundle; null when it is the one that the setup starts from. */
function wrongState({ start }: Setup, state: Uint8Array | null): string | null {
  if (start.kind !== 'state')
    return state && `The bundle carries a start state, but its setup starts from “${start.kind}”.`;
  if (!state) return `The setup starts from the last state of a run, and that state is missing in the bundle.`;
  if (stateSha256(state) === start.stateSha256) return null;
  return 'The state in the bundle is another one than the one that its setup starts from.';
}

/**
 * Reads a setup from JSON text: the setup itself, as scripts post it, or an object {label, setup}. Values out of range
 * are let into the form, which shows them; what is no setup is refused with the places that are wrong.
 */
export function readSetupFile(text: string): SetupFileReading {
  let json: unknown;
  try {
    json = JSON.parse(text);
  } catch (error) {
    if (!(error instanceof SyntaxError)) throw error;
    return { kind: 'refused', reasons: [`This file is not JSON: ${error.message}.`] };
  }
  const outer = isObject(json) && isObject(json['setup']) ? json : null;
  const candidate: unknown = outer ? outer['setup'] : json;
  const label = typeof outer?.['label'] === 'string' ? outer['label'].slice(0, 80) : null;
  if (!isObject(candidate) || !('schemaVersion' in candidate))
    return { kind: 'refused', reasons: ['This file holds no setup: a setup is an object with a schemaVersion.'] };
  if (candidate['schemaVersion'] !== 1)
    return {
      kind: 'refused',
      reasons: [
        `The setup says schema version ${JSON.stringify(candidate['schemaVersion'])}; this form reads version 1.`,
      ],
    };
  const parsed = setupSchema.safeParse(candidate);
  if (parsed.success) return { kind: 'setup', setup: parsed.data, label, refusedFields: 0 };
  const wrong = parsed.error.issues.filter(
    (issue) => !CURABLE.has(issue.code) && !(issue.code === 'invalid_type' && isEmptyField(candidate, issue.path)),
  );
  if (wrong.length === 0)
    return { kind: 'setup', setup: candidate as unknown as Setup, label, refusedFields: parsed.error.issues.length };
  const reasons = wrong.slice(0, MOST_REASONS).map((issue) => {
    const pointer = toPointer(issue.path);
    return `${pointer || 'The setup'} (${fieldLabel(pointer)}): ${issue.message}`;
  });
  if (wrong.length > MOST_REASONS) reasons.push(`and ${wrong.length - MOST_REASONS} more`);
  return { kind: 'refused', reasons };
}

/** True when the form can show it: every part is there and of its kind, though numbers may be empty or out of range. */
export function hasShapeOfSetup(value: unknown): value is Setup {
  return readSetupFile(JSON.stringify(value ?? null)).kind === 'setup';
}

/** A number that was still empty when the form was saved. */
function isEmptyField(setup: unknown, path: readonly PropertyKey[]): boolean {
  return valueAt(setup, toPointer(path)) === null;
}

function isObject(value: unknown): value is Record<string, unknown> {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}
