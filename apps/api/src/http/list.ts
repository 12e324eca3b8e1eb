import { col, fn, Op, where, type WhereOptions } from 'sequelize';

/** Rows in which any of the columns contains `q`, whatever the case (of the Latin letters that SQLite folds). */
export function containing(q: string, columns: readonly string[]): WhereOptions {
  // instr rather than LIKE: a % or _ that somebody types is a character like any other.
  return {
    [Op.or]: columns.map((name) => where(fn('instr', fn('lower', col(name)), q.toLowerCase()), { [Op.gt]: 0 })),
  };
}
