import { type Role } from '@halfdeep/contracts';
import { Model, type InferAttributes, type InferCreationAttributes, type Sequelize } from 'sequelize';
import { text, uuid } from '../columns';

/** One role that one person holds. */
export class PersonRole extends Model<InferAttributes<PersonRole>, InferCreationAttributes<PersonRole>> {
  declare personId: string;
  declare role: Role;

  static define(sequelize: Sequelize): void {
    this.init(
      {
        personId: { ...uuid(), primaryKey: true },
        role: { ...text(), primaryKey: true },
      },
      { sequelize, tableName: 'person_roles', underscored: true, timestamps: false },
    );
  }
}
