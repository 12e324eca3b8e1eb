import { type Migration } from '../../migration';

/** Now, as Sequelize writes dates on SQLite. */
const NOW = `strftime('%Y-%m-%d %H:%M:%f +00:00', 'now')`;

const up: Migration['up'] = async (query) => {
  const run = (sql: string) => query.sequelize.query(sql);
  await run(`
    CREATE TABLE runs (
      id TEXT NOT NULL PRIMARY KEY,
      experiment_id TEXT NOT NULL REFERENCES experiments (id),
      owner_id TEXT NOT NULL REFERENCES people (id),
      label TEXT NOT NULL CHECK (length(label) BETWEEN 1 AND 80),
      setup JSON NOT NULL CHECK (json_valid(setup)),
      preflight JSON NOT NULL CHECK (json_valid(preflight)),
      nx INTEGER NOT NULL CHECK (nx > 0),
      ny INTEGER NOT NULL CHECK (ny > 0),
      parent_run_id TEXT REFERENCES runs (id) ON DELETE SET NULL,
      parent_label TEXT,
      descent TEXT NOT NULL CHECK (descent IN ('control', 'sensitivity', 'extension')),
      changes JSON NOT NULL CHECK (json_valid(changes)),
      state TEXT NOT NULL CHECK (state IN ('queued', 'running', 'finished', 'stopped', 'failed')),
      queued_reason TEXT CHECK (queued_reason IN ('cap lowered', 'worker died', 'disk full', 'server stopped', 'resumed')),
      queue_order REAL,
      failure JSON CHECK (failure IS NULL OR json_valid(failure)),
      deaths INTEGER NOT NULL DEFAULT 0 CHECK (deaths >= 0),
      created_at DATETIME NOT NULL,
      queued_at DATETIME,
      started_at DATETIME,
      ended_at DATETIME,
      progress JSON NOT NULL CHECK (json_valid(progress)),
      fingerprint JSON CHECK (fingerprint IS NULL OR json_valid(fingerprint)),
      state_sha256 TEXT,
      last_step INTEGER,
      disk_bytes INTEGER,
      worker_pid INTEGER,
      CHECK ((state = 'queued') = (queue_order IS NOT NULL)),
      CHECK ((state = 'failed') = (failure IS NOT NULL)),
      CHECK (state <> 'finished' OR (fingerprint IS NOT NULL AND state_sha256 IS NOT NULL AND last_step IS NOT NULL))
    )`);
  await query.addIndex('runs', ['experiment_id'], { name: 'runs_experiment' });
  await query.addIndex('runs', ['state', 'queue_order'], { name: 'runs_waiting' });
  await query.addIndex('runs', ['ended_at'], { name: 'runs_ended' });
  await query.addIndex('runs', ['parent_run_id'], { name: 'runs_parent' });
  // What determines a run never changes once it is queued.
  await run(`
    CREATE TRIGGER runs_setup_immutable
    BEFORE UPDATE OF id, experiment_id, setup, preflight, nx, ny, descent, changes ON runs
    WHEN NEW.id IS NOT OLD.id OR NEW.experiment_id IS NOT OLD.experiment_id OR NEW.setup IS NOT OLD.setup
      OR NEW.preflight IS NOT OLD.preflight OR NEW.nx IS NOT OLD.nx OR NEW.ny IS NOT OLD.ny
      OR NEW.descent IS NOT OLD.descent OR NEW.changes IS NOT OLD.changes
    BEGIN SELECT RAISE(ABORT, 'The setup of a run never changes once it is queued.'); END`);
  // What moved last in an experiment, in the transaction that moves it.
  const moved = (words: string) => `UPDATE experiments SET moved_at = ${NOW}, moved = ${words}`;
  await run(`
    CREATE TRIGGER runs_inserted AFTER INSERT ON runs
    BEGIN ${moved(`NEW.label || ' queued'`)} WHERE id = NEW.experiment_id; END`);
  await run(`
    CREATE TRIGGER runs_moved AFTER UPDATE OF state ON runs WHEN NEW.state <> OLD.state
    BEGIN
      ${moved(`NEW.label || CASE NEW.state WHEN 'running' THEN ' started' ELSE ' ' || NEW.state END`)}
      WHERE id = NEW.experiment_id;
    END`);
  await run(`
    CREATE TRIGGER runs_deleted AFTER DELETE ON runs
    BEGIN ${moved(`OLD.label || ' deleted'`)} WHERE id = OLD.experiment_id; END`);
};

const down: Migration['down'] = async (query) => {
  const [rows] = await query.sequelize.query('SELECT 1 FROM runs LIMIT 1');
  if (rows.length > 0) throw new Error('Undoing this would lose runs; remove them first.');
  await query.dropTable('runs');
};

export const createRuns: Migration = { name: '2026.12.01T08.00.01-create-runs', up, down };
