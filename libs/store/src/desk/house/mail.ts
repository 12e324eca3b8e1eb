import {
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';
import { instant, rowNumber, text, whole } from '../columns';

/** A mail in the outbox. `body` holds `{link}` where the link goes, so that the link can be blanked and forgotten. */
export class Mail extends Model<InferAttributes<Mail>, InferCreationAttributes<Mail>> {
  declare id: CreationOptional<number>;
  declare createdAt: Date;
  declare recipient: string;
  declare subject: string;
  declare body: string;
  /** The working link, sealed; null when the mail has none, or once it has been sent and is to be forgotten. */
  declare link: string | null;
  declare state: CreationOptional<'waiting' | 'sent' | 'failed'>;
  declare attempts: CreationOptional<number>;
  declare error: CreationOptional<string | null>;
  /** When to try again; null unless waiting. */
  declare nextAttemptAt: Date | null;

  static define(sequelize: Sequelize): void {
    this.init(
      {
        id: rowNumber(),
        createdAt: instant(),
        recipient: text(),
        subject: text(),
        body: text(),
        link: text('maybe'),
        state: { ...text(), defaultValue: 'waiting' },
        attempts: { ...whole(), defaultValue: 0 },
        error: text('maybe'),
        nextAttemptAt: instant('maybe'),
      },
      { sequelize, tableName: 'mails', underscored: true, timestamps: false },
    );
  }
}
