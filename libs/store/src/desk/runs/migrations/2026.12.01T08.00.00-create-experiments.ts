import { type Migration } from '../../migration';

// The declared types DATETIME and JSON tell Sequelize how to read a column back; SQLite keeps both as text.

export const createExperiments: Migration = {
  name: '2026.12.01T08.00.00-create-experiments',
  async up(query) {
    await query.sequelize.query(`CREATE TABLE experiments (
      id TEXT NOT NULL PRIMARY KEY,
      owner_id TEXT NOT NULL REFERENCES people (id),
      question TEXT NOT NULL CHECK (length(question) >= 8),
      notes TEXT NOT NULL,
      created_at DATETIME NOT NULL,
      moved_at DATETIME NOT NULL,
      moved TEXT NOT NULL
    )`);
    await query.addIndex('experiments', ['moved_at'], { name: 'experiments_moved_at' }); // the list sorts by it
    await query.addIndex('experiments', ['owner_id'], { name: 'experiments_owner' });
  },
  async down(query) {
    const [rows] = await query.sequelize.query('SELECT 1 FROM experiments LIMIT 1');
    if (rows.length > 0) throw new Error('Undoing this would lose experiments; remove them first.');
    await query.dropTable('experiments');
  },
};
