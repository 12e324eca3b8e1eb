import { type Role } from '@halfdeep/contracts';
import { DataTypes, Model, type InferAttributes, type InferCreationAttributes, type Sequelize } from 'sequelize';

/** One role that one person holds. */
export class PersonRole extends Model<InferAttributes<PersonRole>, InferCreationAttributes<PersonRole>> {
  declare personId: string;
  declare role: Role;

  static define(sequelize: Sequelize): void {
    this.init(
      {
        personId: { type: DataTypes.UUID, primaryKey: true },
        role: { type: DataTypes.TEXT, primaryKey: true },
      },
      { sequelize, tableName: 'person_roles', underscored: true, timestamps: false },
    );
  }
}
