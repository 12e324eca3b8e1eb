import type { FieldError } from '@halfdeep/contracts';

/** Bad input: a sentence on what is wrong and what would be right, and one line a wrong place by JSON pointer. */
export class Refusal extends Error {
  override readonly name = 'Refusal';
  constructor(
    message: string,
    readonly errors: readonly FieldError[] = [],
  ) {
    super(message);
  }
}
