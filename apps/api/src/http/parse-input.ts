import type * as z from 'zod';
import { InputError, type FieldError } from './errors';

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

/**
 * Parses a body, query or path against its schema. Throws InputError with one line a wrong field: 422 for a body that
 * was read but is not acceptable, 400 for path and query.
 */
export function parseInput<S extends z.ZodType>(
  schema: S,
  input: unknown,
  part: 'body' | 'query' | 'path',
): z.infer<S> {
  const parsed = schema.safeParse(input, { error: inWords });
  if (parsed.success) return parsed.data;
  const errors: FieldError[] = parsed.error.issues.map((issue) => ({
    pointer: jsonPointer(issue.path),
    detail: capital(issue.message),
  }));
  const [first] = errors;
  const where = first?.pointer ? ` (at ${first.pointer})` : '';
  const others = errors.length - 1;
  const more = others === 0 ? '' : others === 1 ? ' So is one more place.' : ` So are ${others} more places.`;
  const detail = `The ${part} of the request is not right: ${first?.detail ?? 'it does not fit'}${where}.${more}`;
  throw new InputError(detail.replace(/\.( \(at [^)]*\))\./, '$1.'), errors, part === 'body' ? 422 : 400);
}
