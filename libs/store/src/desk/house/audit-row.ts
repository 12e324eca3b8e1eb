import {
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import { instant, rowNumber, text, uuid } from '../columns';

/** One line of the audit trail: who did what to what, when, from where. Never changed, never deleted. */
export class AuditRow extends Model<InferAttributes<AuditRow>, InferCreationAttributes<AuditRow>> {
  declare id: CreationOptional<number>;
  declare at: Date;
  /** Null: the system itself. */
  declare actorId: string | null;
  /** The actor's name at that time. */
  declare actorName: string | null;
  declare action: string;
  declare subject: string;
  declare detail: string;
  declare address: string | null;

  static define(sequelize: Sequelize): void {
    this.init(
      {
        id: rowNumber(),
        at: instant(),
        actorId: uuid('maybe'),
        actorName: text('maybe'),
        action: text(),
        subject: text(),
        detail: text(),
        address: text('maybe'),
      },
      { sequelize, tableName: 'audit', underscored: true, timestamps: false },
    );
  }
}
