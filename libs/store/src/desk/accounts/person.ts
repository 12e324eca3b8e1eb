import {
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type NonAttribute,
  type Sequelize,
} from 'sequelize';
import { type PersonRole } from './person-role';
import { instant, text, uuid } from '../columns';

export type PersonState = 'invited' | 'active' | 'deactivated';

/** Somebody who may sign in, once the invitation is accepted. Roles are rows of their own (`PersonRole`). */
export class Person extends Model<InferAttributes<Person>, InferCreationAttributes<Person>> {
  declare id: string;
  /** In lower case; unique. */
  declare email: string;
  declare name: string;
  declare state: PersonState;
  /** bcrypt; null until the invitation is accepted. */
  declare passwordHash: string | null;
  declare createdAt: Date;
  declare lastSeenAt: CreationOptional<Date | null>;
  /** Present when read with `include: 'roleRows'`. */
  declare roleRows?: NonAttribute<PersonRole[]>;

  static define(sequelize: Sequelize): void {
    this.init(
      {
        id: { ...uuid(), primaryKey: true },
        email: text(),
        name: text(),
        state: text(),
        passwordHash: text('maybe'),
        createdAt: instant(),
        lastSeenAt: instant('maybe'),
      },
      { sequelize, tableName: 'people', underscored: true, timestamps: false },
    );
  }
}
