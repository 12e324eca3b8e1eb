import { type Migration } from '../../migration';

export const createConvergenceRuns: Migration = {
  name: '2026.12.01T12.20.00-create-convergence-runs',
  async up(query) {
    // One run a grid and a coast: the key is what keeps two requests at once from queueing it twice.
    await query.sequelize.query(`CREATE TABLE convergence_runs (
      base_run_id TEXT NOT NULL REFERENCES runs (id) ON DELETE CASCADE,
      coast TEXT NOT NULL CHECK (coast IN ('same', 'anew')),
      role TEXT NOT NULL CHECK (role IN ('half', 'twice')),
      run_id TEXT NOT NULL UNIQUE REFERENCES runs (id) ON DELETE CASCADE,
      PRIMARY KEY (base_run_id, coast, role),
      CHECK (run_id <> base_run_id)
    )`);
  },
  down: (query) => query.dropTable('convergence_runs'),
};
