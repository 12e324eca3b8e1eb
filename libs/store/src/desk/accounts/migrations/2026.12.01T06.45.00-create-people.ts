import { type Migration } from '../../migration';

export const createPeople: Migration = {
  name: '2026.12.01T06.45.00-create-people',
  async up(query) {
    await query.sequelize.query(`CREATE TABLE people (
      id TEXT NOT NULL PRIMARY KEY,
      email TEXT NOT NULL UNIQUE CHECK (email = lower(email)),
      name TEXT NOT NULL,
      state TEXT NOT NULL CHECK (state IN ('invited', 'active', 'deactivated')),
      password_hash TEXT,
      created_at DATETIME NOT NULL,
      last_seen_at DATETIME,
      CHECK (state <> 'active' OR password_hash IS NOT NULL)
    )`);
    await query.sequelize.query(`CREATE TABLE person_roles (
      person_id TEXT NOT NULL REFERENCES people (id) ON DELETE CASCADE,
      role TEXT NOT NULL CHECK (role IN ('modeller', 'reviewer', 'admin')),
      PRIMARY KEY (person_id, role)
    ) WITHOUT ROWID`);
  },
  async down(query) {
    const [rows] = await query.sequelize.query('SELECT 1 FROM people LIMIT 1');
    if (rows.length > 0) throw new Error('Undoing this would lose people; remove them first.');
    await query.dropTable('person_roles');
    await query.dropTable('people');
  },
};
