import {
  Model,
  type InferAttributes,
  type InferCreationAttributes,
  type NonAttribute,
  type Sequelize,
} from 'sequelize';
import { type Person } from './person';
import { instant, text, uuid } from '../columns';

/** One sign-in: a family of refresh tokens of which the newest alone is good. Ends by sign-out, expiry or a lost right. */
export class Session extends Model<InferAttributes<Session>, InferCreationAttributes<Session>> {
  declare id: string;
  declare personId: string;
  declare createdAt: Date;
  declare expiresAt: Date;
  declare endedAt: Date | null;
  /** Why it ended: "signed out", "token reused", "password reset", "roles changed", "deactivated". */
  declare endedBecause: string | null;
  declare address: string | null;
  /** Present when read with `include: 'person'`. */
  declare person?: NonAttribute<Person>;

  static define(sequelize: Sequelize): void {
    this.init(
      {
        id: { ...uuid(), primaryKey: true },
        personId: uuid(),
        createdAt: instant(),
        expiresAt: instant(),
        endedAt: instant('maybe'),
        endedBecause: text('maybe'),
        address: text('maybe'),
      },
      { sequelize, tableName: 'sessions', underscored: true, timestamps: false },
    );
  }
}
