import { Sequelize, Transaction } from 'sequelize';
import sqlite3 from 'sqlite3';

/** The handle that sqlite3 opens; enough of it for batches of BLOBs, which Sequelize would write as hex text. */
export type RawDatabase = sqlite3.Database;

const PRAGMAS = ['journal_mode = WAL', 'synchronous = NORMAL', 'busy_timeout = 5000', 'foreign_keys = ON'];

/**
 * Sequelize opens a new handle with default pragmas for every transaction and fires no hook when it does, so the
 * pragmas are set where the handle is made.
 */
class PragmaDatabase extends sqlite3.Database {
  constructor(
    filename: string,
    mode?: number | ((error: Error | null) => void),
    callback?: (error: Error | null) => void,
  ) {
    const opened = typeof mode === 'function' ? mode : callback;
    const flags = typeof mode === 'number' ? mode : sqlite3.OPEN_READWRITE | sqlite3.OPEN_CREATE;
    super(filename, flags, (error) => {
      if (error) return opened?.call(this, error);
      const readOnly = (flags & sqlite3.OPEN_READONLY) !== 0;
      const pragmas = readOnly ? ['busy_timeout = 5000'] : PRAGMAS;
      this.exec(pragmas.map((pragma) => `PRAGMA ${pragma};`).join(''), (failed) => opened?.call(this, failed));
    });
  }
}

/** A Sequelize instance on one SQLite file, with write-ahead logging on every handle. `path` must be absolute. */
export function openSqlite(path: string, options: { readOnly?: boolean } = {}): Sequelize {
  return new Sequelize({
    dialect: 'sqlite',
    storage: path,
    dialectModule: { ...sqlite3, Database: PragmaDatabase },
    dialectOptions: options.readOnly ? { mode: sqlite3.OPEN_READONLY } : {},
    transactionType: Transaction.TYPES.IMMEDIATE,
    retry: { max: 1 },
    logging: false,
  });
}

/** The instance's own handle outside transactions: for multi-row statements with BLOB parameters. */
export async function rawHandle(sequelize: Sequelize): Promise<RawDatabase> {
  return (await sequelize.connectionManager.getConnection({ type: 'write' } as never)) as RawDatabase;
}

/** Runs one statement on a raw handle; resolves to the number of changed rows. */
export function runRaw(database: RawDatabase, sql: string, parameters: unknown[] = []): Promise<number> {
  return new Promise((resolve, reject) => {
    database.run(sql, parameters, function (error) {
      if (error) reject(error);
      else resolve(this.changes);
    });
  });
}

/** Reads all rows of one statement on a raw handle. */
export function allRaw<T>(database: RawDatabase, sql: string, parameters: unknown[] = []): Promise<T[]> {
  return new Promise((resolve, reject) => {
    database.all(sql, parameters, (error, rows) => (error ? reject(error) : resolve(rows as T[])));
  });
}
