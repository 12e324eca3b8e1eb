import { type Sequelize } from 'sequelize';
import { type SchemaPart } from '../schema';
import { createPeople } from './migrations/2026.12.01T06.45.00-create-people';
import { createSessions } from './migrations/2026.12.01T06.46.00-create-sessions';
import { OneUseToken } from './one-use-token';
import { Person } from './person';
import { PersonRole } from './person-role';
import { RefreshToken } from './refresh-token';
import { Session } from './session';

export * from './one-use-token';
export * from './person';
export * from './person-role';
export * from './refresh-token';
export * from './session';

/** People, their roles, sessions and the tokens that links carry. */
export const accountsSchema: SchemaPart = {
  define(sequelize: Sequelize): void {
    for (const model of [Person, PersonRole, Session, RefreshToken, OneUseToken]) model.define(sequelize);
    Person.hasMany(PersonRole, { as: 'roleRows', foreignKey: 'personId' });
    Session.belongsTo(Person, { as: 'person', foreignKey: 'personId' });
  },
  migrations: [createPeople, createSessions],
};
