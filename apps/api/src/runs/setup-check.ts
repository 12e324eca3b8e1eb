import { preflightRefusal } from '@halfdeep/contracts';
import { preflight, type Preflight, type Setup } from '@halfdeep/ocean';
import { InputError } from '../http/errors';
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
    const refusal = preflightRefusal(answer, place);
    if (refusal) throw new InputError(refusal.detail, refusal.errors, 422);
    return answer;
  }
}
