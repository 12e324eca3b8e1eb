import { isZip, preflightRefusal, readBundle, readFields, SetupFileError, setupSchema } from '@halfdeep/contracts';
import { Integration, preflight, type PreflightContext, type Setup } from '@halfdeep/ocean';
import { Refusal } from './refusal';

/** What a setup file holds, as far as schema and preflight let it in. */
export interface SetupInput {
  setup: Setup;
  /** Bytes of the state that it starts from; null when it starts from none. */
  state: Uint8Array | null;
  /** Where the file names the run. */
  label: string | null;
  /** Cautions of preflight, one sentence each. */
  cautions: string[];
}

/**
 * Reads a setup (the setup itself, or {label, setup} as the API takes it) or a bundle, and holds it against schema and
 * preflight. Throws Refusal in the sentences of the API, by JSON pointer into the file.
 */
export function readSetup(bytes: Uint8Array, context: PreflightContext): SetupInput {
  const { text, state } = contentOf(bytes);
  const json = parseJson(text);
  const wrapped = isObject(json) && isObject(json['setup']);
  const place = (pointer: string) => `${wrapped ? '/setup' : ''}${pointer}`;
  const { data: setup, errors } = readFields(setupSchema, wrapped ? json['setup'] : json);
  if (errors)
    throw new Refusal(
      'The setup is not right.',
      errors.map(({ pointer, detail }) => ({ pointer: place(pointer), detail })),
    );
  const answer = preflight(setup, context);
  const refusal = preflightRefusal(answer, place);
  if (refusal) throw new Refusal(refusal.detail, refusal.errors);
  checkState(setup, state, place('/start'));
  return {
    setup,
    state,
    label: wrapped && typeof json['label'] === 'string' ? json['label'] : null,
    cautions: answer.checks.filter(({ verdict }) => verdict === 'caution').map(({ reason }) => reason),
  };
}

function contentOf(bytes: Uint8Array): { text: string; state: Uint8Array | null } {
  if (!isZip(bytes)) return { text: new TextDecoder().decode(bytes), state: null };
  try {
    return readBundle(bytes);
  } catch (error) {
    if (error instanceof SetupFileError) throw new Refusal(error.message);
    throw error;
  }
}

function parseJson(text: string): unknown {
  try {
    return JSON.parse(text);
  } catch (error) {
    if (!(error instanceof SyntaxError)) throw error;
    throw new Refusal(`The setup is neither JSON nor a bundle: ${error.message}.`);
  }
}

/** The state must be there when the setup starts from one, and be that very one; else it must not be there. */
function checkState({ start }: Setup, state: Uint8Array | null, pointer: string): void {
  const refuse = (at: string, detail: string): never => {
    throw new Refusal(detail, [{ pointer: `${pointer}${at}`, detail }]);
  };
  if (start.kind !== 'state') {
    if (state) refuse('/kind', `The bundle carries a start state, but the setup starts from “${start.kind}”.`);
    return;
  }
  if (!state)
    return refuse(
      '/stateSha256',
      `The setup starts from the last state of run ${start.runId}, and that state is missing: export the setup again from the run or the form, which then writes a bundle (.halfdeep.zip) with the state in it.`,
    );
  const arrived = Integration.stateSha256(state);
  if (arrived !== start.stateSha256)
    refuse(
      '/stateSha256',
      `The setup starts from state ${start.stateSha256}; the state in the bundle is another one, ${arrived}.`,
    );
}

function isObject(value: unknown): value is Record<string, unknown> {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}
