import type * as z from 'zod';
import { InputError, type FieldError } from './errors';

/** JSON pointer (RFC 6901) of a zod path. */
export function jsonPointer(path: readonly PropertyKey[]): string {
  return path.map((step) => `/${String(step).replaceAll('~', '~0').replaceAll('/', '~1')}`).join('');
}

/**
 * Parses a body, query or path against its schema. Throws InputError with one line a wrong field: 422 for a body that
 * was read but is not acceptable, 400 for path and query.
 */
export function parseInput<S extends z.ZodType>(
  schema: S,
  input: unknown,
  part: 'body' | 'query' | 'path',
): z.infer<S> {
  const parsed = schema.safeParse(input);
  if (parsed.success) return parsed.data;
  const errors: FieldError[] = parsed.error.issues.map((issue) => ({
    pointer: jsonPointer(issue.path),
    detail: issue.message,
  }));
  const [first] = errors;
  const where = first?.pointer ? ` (at ${first.pointer})` : '';
  const more = errors.length > 1 ? ` So are ${errors.length - 1} more places.` : '';
  const detail = `The ${part} of the request is not right: ${first?.detail ?? 'it does not fit'}${where}.${more}`;
  throw new InputError(detail.replace(/\.( \(at [^)]*\))\./, '$1.'), errors, part === 'body' ? 422 : 400);
}
