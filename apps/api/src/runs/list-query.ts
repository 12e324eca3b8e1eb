import { type PageQuery } from '@halfdeep/contracts';
import { InputError } from '../http/errors';

export type PageInput = PageQuery;

/**
 * The order that `?sort=` asks: a name of `sorts`, with a minus for descending. Without one, `fallback` descending.
 * Throws InputError (400) naming what could have been asked.
 */
export function orderOf(
  sort: string | undefined,
  sorts: Record<string, string>,
  fallback: string,
): [string, 'ASC' | 'DESC'] {
  if (!sort) return [fallback, 'DESC'];
  const descending = sort.startsWith('-');
  const name = descending ? sort.slice(1) : sort;
  const column = Object.hasOwn(sorts, name) ? sorts[name] : undefined;
  if (column) return [column, descending ? 'DESC' : 'ASC'];
  const names = Object.keys(sorts).join(', ');
  const detail = `This list sorts by ${names} (with a minus in front: descending); “${sort}” arrived.`;
  throw new InputError(detail, [{ pointer: '/sort', detail }]);
}
