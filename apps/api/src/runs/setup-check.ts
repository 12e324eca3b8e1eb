import { preflight, type Check, type Preflight, type Setup } from '@halfdeep/ocean';
import { InputError, type FieldError } from '../http/errors';
import { type Machine } from './machine';

/** Preflight on the server: the same library as in the form, with this machine's speed and disk. */
export class SetupCheck {
  constructor(private readonly machine: Machine) {}

  /** What preflight says of a setup that fits its schema. */
  async check(setup: Setup): Promise<Preflight> {
    return preflight(setup, await this.machine.context());
  }

  /**
   * The same, and throws InputError (422) naming fields and remedies when preflight refuses. `place` says where in the
   * request a field of the setup stands, as a JSON pointer.
   */
  async admit(setup: Setup, place: (pointer: string) => string): Promise<Preflight> {
    const answer = await this.check(setup);
    if (answer.verdict !== 'refuse') return answer;
    const refused = answer.checks.filter((check) => check.verdict === 'refuse');
    const errors = refused.flatMap((check) => checkErrors(check, place));
    const detail = `Preflight refuses this setup: ${refused.map((check) => check.reason).join(' ')}`;
    throw new InputError(detail, errors, 422);
  }
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
