import { type Migration } from '../../migration';

export const createVisits: Migration = {
  name: '2026.12.01T08.00.02-create-visits',
  async up(query) {
    await query.sequelize.query(`CREATE TABLE visits (
      person_id TEXT NOT NULL PRIMARY KEY REFERENCES people (id) ON DELETE CASCADE,
      seen_at DATETIME NOT NULL,
      since DATETIME
    )`);
  },
  down: (query) => query.dropTable('visits'),
};
