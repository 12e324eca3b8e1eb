import { type Migration } from '../../migration';

export const createSessions: Migration = {
  name: '2026.12.01T06.46.00-create-sessions',
  async up(query) {
    await query.sequelize.query(`CREATE TABLE sessions (
      id TEXT NOT NULL PRIMARY KEY,
      person_id TEXT NOT NULL REFERENCES people (id) ON DELETE CASCADE,
      created_at DATETIME NOT NULL,
      expires_at DATETIME NOT NULL,
      ended_at DATETIME,
      ended_because TEXT,
      address TEXT,
      CHECK ((ended_at IS NULL) = (ended_because IS NULL))
    )`);
    // Losing a right ends all sessions of one person.
    await query.sequelize.query('CREATE INDEX sessions_person ON sessions (person_id) WHERE ended_at IS NULL');
    await query.sequelize.query(`CREATE TABLE refresh_tokens (
      hash TEXT NOT NULL PRIMARY KEY,
      session_id TEXT NOT NULL REFERENCES sessions (id) ON DELETE CASCADE,
      issued_at DATETIME NOT NULL,
      rotated_at DATETIME
    ) WITHOUT ROWID`);
    await query.sequelize.query('CREATE INDEX refresh_tokens_session ON refresh_tokens (session_id)');
    await query.sequelize.query(`CREATE TABLE one_use_tokens (
      hash TEXT NOT NULL PRIMARY KEY,
      purpose TEXT NOT NULL CHECK (purpose IN ('reset', 'invitation', 'first-admin')),
      person_id TEXT REFERENCES people (id) ON DELETE CASCADE,
      created_at DATETIME NOT NULL,
      expires_at DATETIME NOT NULL,
      used_at DATETIME,
      issued_by TEXT,
      CHECK ((person_id IS NULL) = (purpose = 'first-admin'))
    ) WITHOUT ROWID`);
    await query.sequelize.query('CREATE INDEX one_use_tokens_person ON one_use_tokens (person_id)');
  },
  async down(query) {
    // Nothing is lost that signing in again does not bring back.
    for (const table of ['one_use_tokens', 'refresh_tokens', 'sessions']) await query.dropTable(table);
  },
};
