import { col, fn, Op, where, type WhereOptions } from 'sequelize';

/** As SQLite's lower() folds: the letters a to z alone. */
const fold = (text: string) => text.replace(/[A-Z]/g, (letter) => letter.toLowerCase());
const capitalised = (text: string) => text.replace(/(?<!\p{L})\p{L}/gu, (letter) => letter.toUpperCase());

/**
 * Rows in which any of the columns contains `q`, whatever the case. SQLite folds no letter beyond z, so what is typed is
 * looked for as it is, in small letters, in capitals, and capitalised like a name.
 */
export function containing(q: string, columns: readonly string[]): WhereOptions {
  const small = q.toLowerCase();
  const spellings = [...new Set([q, small, q.toUpperCase(), capitalised(small)].map(fold))];
  // instr rather than LIKE: a % or _ that somebody types is a character like any other.
  const holds = (name: string, text: string) => where(fn('instr', fn('lower', col(name)), text), { [Op.gt]: 0 });
  return { [Op.or]: columns.flatMap((name) => spellings.map((text) => holds(name, text))) };
}
