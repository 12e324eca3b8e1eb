import { QueryTypes, type QueryInterface, type Sequelize } from 'sequelize';
import { Umzug, type UmzugStorage } from 'umzug';
import { type Migration } from './migration';

const TABLE = 'desk_migrations';

/** Names of the migrations that this file has had, in order; makes the table that holds them when it is missing. */
export async function appliedMigrations(sequelize: Sequelize): Promise<string[]> {
  await sequelize.query(
    `CREATE TABLE IF NOT EXISTS ${TABLE} (name TEXT NOT NULL PRIMARY KEY, applied_at TEXT NOT NULL)`,
  );
  const rows = await sequelize.query<{ name: string }>(`SELECT name FROM ${TABLE} ORDER BY name`, {
    type: QueryTypes.SELECT,
  });
  return rows.map((row) => row.name);
}

/**
 * Umzug's own Sequelize storage creates its table with `sync()`; this one is a plain table. The row of a migration is
 * written inside the migration's transaction (see `inTransaction`), so `logMigration` finds it there already.
 */
function storage(sequelize: Sequelize): UmzugStorage<QueryInterface> {
  return {
    logMigration: async ({ name }) => {
      await sequelize.query(`INSERT OR IGNORE INTO ${TABLE} (name, applied_at) VALUES (?, ?)`, {
        replacements: [name, new Date().toISOString()],
      });
    },
    unlogMigration: async ({ name }) => {
      await sequelize.query(`DELETE FROM ${TABLE} WHERE name = ?`, { replacements: [name] });
    },
    executed: () => appliedMigrations(sequelize),
  };
}

/** Runs `work` on the instance's own handle between BEGIN and COMMIT: a migration happens whole or not at all. */
async function inTransaction(sequelize: Sequelize, work: () => Promise<void>): Promise<void> {
  await sequelize.query('BEGIN IMMEDIATE');
  try {
    await work();
    await sequelize.query('COMMIT');
  } catch (error) {
    await sequelize.query('ROLLBACK');
    throw error;
  }
}

/** The migrator of a desk database: `up()` brings it to the newest schema, `down({ to: 0 })` undoes everything. */
export function deskMigrator(sequelize: Sequelize, migrations: readonly Migration[]): Umzug<QueryInterface> {
  const store = storage(sequelize);
  const context = sequelize.getQueryInterface();
  const steps = [...migrations].sort((a, b) => (a.name < b.name ? -1 : 1));
  const twice = steps.find((step, k) => step.name === steps[k - 1]?.name);
  if (twice) throw new Error(`Two migrations are called ${twice.name}.`);
  return new Umzug<QueryInterface>({
    migrations: steps.map((step) => ({
      name: step.name,
      up: () =>
        inTransaction(sequelize, async () => {
          await step.up(context);
          await store.logMigration({ name: step.name, context });
        }),
      down: () =>
        inTransaction(sequelize, async () => {
          await step.down(context);
          await store.unlogMigration({ name: step.name, context });
        }),
    })),
    context,
    storage: store,
    logger: undefined,
  });
}
