import { AsyncLocalStorage } from 'node:async_hooks';
import { type Sequelize, type Transaction } from 'sequelize';
import { openSqlite } from '../sqlite';
import { appliedMigrations, deskMigrator } from './migrate';
import { DESK_SCHEMA } from './schema';

/** The class-level models are bound to one file, so a process opens one desk database at a time. */
let open: string | null = null;

/**
 * The desk database: people, sessions, experiments, runs, mails, audit, settings. Reads go straight to the models;
 * **every write goes through `write`**, which lets one transaction run at a time. Several would wait for the file's
 * lock on sqlite3's few threads, and the transaction that holds the lock needs one of those threads to commit.
 */
export class DeskDatabase {
  private readonly current = new AsyncLocalStorage<Transaction>();
  private last: Promise<unknown> = Promise.resolve();

  constructor(
    readonly sequelize: Sequelize,
    readonly path: string,
    /** Name of the newest migration that has been applied. */
    readonly schema: string,
  ) {}

  /**
   * Runs `work` in an IMMEDIATE transaction after all earlier writes; commits when it resolves, rolls back when it
   * rejects. Every statement inside must be given the transaction. A write inside a write joins the outer one.
   */
  write<T>(work: (transaction: Transaction) => Promise<T>): Promise<T> {
    const outer = this.current.getStore();
    if (outer && !(outer as { finished?: string }).finished) return work(outer);
    const turn = this.last.then(() =>
      this.sequelize.transaction((transaction) => this.current.run(transaction, () => work(transaction))),
    );
    // The next in line waits for this one's end, whichever it is; the caller gets the failure.
    this.last = turn.catch(() => undefined);
    return turn;
  }

  /** Waits for the writes under way, then closes the file. */
  async close(): Promise<void> {
    await this.last;
    await this.sequelize.close();
    if (open === this.path) open = null;
  }
}

/** Opens (or makes) the desk database at an absolute `path`, brings its schema up to date and binds the models. */
export async function openDesk(path: string): Promise<DeskDatabase> {
  if (open !== null) throw new Error(`The desk database ${open} is open; close it before opening ${path}.`);
  open = path;
  const sequelize = openSqlite(path);
  try {
    const migrator = deskMigrator(
      sequelize,
      DESK_SCHEMA.flatMap((part) => part.migrations),
    );
    await refuseNewer(sequelize, path);
    await migrator.up();
    const applied = await appliedMigrations(sequelize);
    for (const part of DESK_SCHEMA) part.define(sequelize);
    return new DeskDatabase(sequelize, path, applied.at(-1) ?? 'empty');
  } catch (error) {
    open = null;
    await sequelize.close();
    throw error;
  }
}

/** A file that a newer program has migrated must not be written by this one. */
async function refuseNewer(sequelize: Sequelize, path: string): Promise<void> {
  const known = new Set(DESK_SCHEMA.flatMap((part) => part.migrations.map((step) => step.name)));
  const unknown = (await appliedMigrations(sequelize)).filter((name) => !known.has(name));
  if (unknown.length > 0)
    throw new Error(`${path} was written by a newer Halfdeep (${unknown.join(', ')} is unknown here). Start that one.`);
}
