import type * as z from 'zod';
import type { Problem } from './problem';

/** A wrong place: a JSON pointer (RFC 6901) and what is wrong there. */
export type FieldError = NonNullable<Problem['errors']>[number];

/** JSON pointer (RFC 6901) of a zod path. */
export function jsonPointer(path: readonly PropertyKey[]): string {
  return path.map((step) => `/${String(step).replaceAll('~', '~0').replaceAll('/', '~1')}`).join('');
}

const KINDS: Record<string, string> = {
  string: 'a text',
  number: 'a number',
  int: 'a whole number',
  boolean: 'true or false',
  array: 'a list',
  object: 'an object',
};

/** What arrived, by its kind: a value might be a password. */
function kindOf(input: unknown): string {
  if (input === undefined || input === null) return 'nothing';
  return KINDS[Array.isArray(input) ? 'array' : typeof input] ?? 'something else';
}

/** Sentences for schemas that have none of their own; undefined leaves it to the library. */
const inWords: z.core.$ZodErrorMap = (issue) => {
  if (issue.code === 'invalid_type')
    return `${KINDS[issue.expected] ?? issue.expected} belongs here; ${kindOf(issue.input)} arrived.`;
  if (issue.code === 'unrecognized_keys')
    return `Nothing here is called ${issue.keys.map((key) => `“${key}”`).join(' or ')}.`;
  if (issue.code !== 'too_small' && issue.code !== 'too_big') return undefined;
  const [word, limit] = issue.code === 'too_small' ? ['at least', issue.minimum] : ['at most', issue.maximum];
  const counted: Record<string, string> = { string: ' characters', array: ' entries' };
  const arrived = typeof issue.input === 'number' ? `; ${issue.input} arrived` : '';
  return `This must be ${word} ${limit}${counted[issue.origin] ?? ''}${arrived}.`;
};
const capital = (sentence: string) => sentence.charAt(0).toUpperCase() + sentence.slice(1);

/** What a schema made of an input: the value, or one line a wrong place. */
export type FieldReading<T> = { data: T; errors: null } | { data: null; errors: FieldError[] };

/** Holds an input against a schema; the API and the headless command say the same sentences by the same pointers. */
export function readFields<S extends z.ZodType>(schema: S, input: unknown): FieldReading<z.infer<S>> {
  const parsed = schema.safeParse(input, { error: inWords });
  if (parsed.success) return { data: parsed.data, errors: null };
  const errors = parsed.error.issues.map((issue) => ({
    pointer: jsonPointer(issue.path),
    detail: capital(issue.message),
  }));
  return { data: null, errors };
}
