/** JSON pointers (RFC 6901) into plain data, without ever changing what they point into. */

/** Reference tokens of a pointer: "/wind/components/0" → ["wind", "components", "0"]. */
export function pointerTokens(pointer: string): string[] {
  if (pointer === '') return [];
  return pointer
    .slice(1)
    .split('/')
    .map((token) => token.replace(/~1/g, '/').replace(/~0/g, '~'));
}

/** The pointer of a path as zod gives it: ["basin", "islands", 0] → "/basin/islands/0". */
export function toPointer(path: readonly PropertyKey[]): string {
  return path.map((key) => `/${String(key).replace(/~/g, '~0').replace(/\//g, '~1')}`).join('');
}

/** What stands at a pointer, or undefined when there is no such place. */
export function valueAt(data: unknown, pointer: string): unknown {
  let here = data;
  for (const token of pointerTokens(pointer)) {
    if (typeof here !== 'object' || here === null) return undefined;
    here = (here as Record<string, unknown>)[token];
  }
  return here;
}

/**
 * A copy of `data` with `value` at `pointer`; everything beside the way there is shared. "-" behind a list appends.
 * RangeError when the way does not exist.
 */
export function withValueAt<T>(data: T, pointer: string, value: unknown): T {
  const replace = (here: unknown, tokens: readonly string[]): unknown => {
    const [token, ...rest] = tokens;
    if (token === undefined) return value;
    if (typeof here !== 'object' || here === null)
      throw new RangeError(`There is no place “${pointer}” in the setup to write to.`);
    if (Array.isArray(here)) {
      const copy: unknown[] = [...(here as unknown[])];
      const index = token === '-' ? copy.length : Number(token);
      if (!Number.isInteger(index) || index < 0 || index > copy.length)
        throw new RangeError(`There is no place “${pointer}” in the setup to write to.`);
      copy[index] = replace(copy[index], rest);
      return copy;
    }
    return { ...here, [token]: replace((here as Record<string, unknown>)[token], rest) };
  };
  return replace(data, pointerTokens(pointer)) as T;
}

/** Whether two plain values say the same. */
export function sameValue(a: unknown, b: unknown): boolean {
  if (Object.is(a, b)) return true;
  if (typeof a !== 'object' || typeof b !== 'object' || a === null || b === null) return false;
  const keys = Object.keys(a);
  return (
    Array.isArray(a) === Array.isArray(b) &&
    keys.length === Object.keys(b).length &&
    keys.every((key) => sameValue((a as Record<string, unknown>)[key], (b as Record<string, unknown>)[key]))
  );
}
