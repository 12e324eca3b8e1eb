import { readFields } from '@halfdeep/contracts';
import type * as z from 'zod';
import { InputError } from './errors';

/**
 * Parses a body, query or path against its schema. Throws InputError with one line a wrong field: 422 for a body that
 * was read but is not acceptable, 400 for path and query.
 */
export function parseInput<S extends z.ZodType>(
  schema: S,
  input: unknown,
  part: 'body' | 'query' | 'path',
): z.infer<S> {
  const { data, errors } = readFields(schema, input);
  if (!errors) return data;
  const [first] = errors;
  const where = first?.pointer ? ` (at ${first.pointer})` : '';
  const others = errors.length - 1;
  const more = others === 0 ? '' : others === 1 ? ' So is one more place.' : ` So are ${others} more places.`;
  const detail = `The ${part} of the request is not right: ${first?.detail ?? 'it does not fit'}${where}.${more}`;
  throw new InputError(detail.replace(/\.( \(at [^)]*\))\./, '$1.'), errors, part === 'body' ? 422 : 400);
}
