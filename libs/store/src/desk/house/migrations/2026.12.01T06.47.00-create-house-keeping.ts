import { type Migration } from '../../migration';

export const createHouseKeeping: Migration = {
  name: '2026.12.01T06.47.00-create-house-keeping',
  async up(query) {
    await query.sequelize.query(`CREATE TABLE mails (
      id INTEGER PRIMARY KEY AUTOINCREMENT,
      created_at DATETIME NOT NULL,
      recipient TEXT NOT NULL,
      subject TEXT NOT NULL,
      body TEXT NOT NULL,
      link TEXT,
      state TEXT NOT NULL CHECK (state IN ('waiting', 'sent', 'failed')),
      attempts INTEGER NOT NULL DEFAULT 0,
      error TEXT,
      next_attempt_at DATETIME,
      CHECK ((state = 'waiting') = (next_attempt_at IS NOT NULL))
    )`);
    await query.sequelize.query(`CREATE INDEX mails_waiting ON mails (next_attempt_at) WHERE state = 'waiting'`);
    await query.sequelize.query(`CREATE TABLE audit (
      id INTEGER PRIMARY KEY AUTOINCREMENT,
      at DATETIME NOT NULL,
      actor_id TEXT REFERENCES people (id) ON DELETE SET NULL,
      actor_name TEXT,
      action TEXT NOT NULL,
      subject TEXT NOT NULL,
      detail TEXT NOT NULL,
      address TEXT
    )`);
    await query.sequelize.query(
      `CREATE TABLE settings (key TEXT NOT NULL PRIMARY KEY, value TEXT NOT NULL) WITHOUT ROWID`,
    );
    await query.sequelize.query(`CREATE TABLE repeated_requests (
      person_id TEXT NOT NULL REFERENCES people (id) ON DELETE CASCADE,
      key TEXT NOT NULL,
      request TEXT NOT NULL,
      status INTEGER NOT NULL,
      answer TEXT NOT NULL,
      at DATETIME NOT NULL,
      PRIMARY KEY (person_id, key)
    ) WITHOUT ROWID`);
    await query.sequelize.query('CREATE INDEX repeated_requests_at ON repeated_requests (at)'); // old ones are swept
  },
  async down(query) {
    const [rows] = await query.sequelize.query('SELECT 1 FROM audit LIMIT 1');
    if (rows.length > 0) throw new Error('Undoing this would lose the audit trail; keep a copy and empty it first.');
    for (const table of ['repeated_requests', 'settings', 'audit', 'mails']) await query.dropTable(table);
  },
};
