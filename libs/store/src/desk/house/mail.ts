import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

/** A mail in the outbox. `body` holds `{link}` where the link goes, so that the link can be blanked and forgotten. */
export class Mail extends Model<InferAttributes<Mail>, InferCreationAttributes<Mail>> {
  declare id: CreationOptional<number>;
  declare createdAt: Date;
  declare recipient: string;
  declare subject: string;
  declare body: string;
  /** The working link; null when the mail has none, or once it has been sent and is to be forgotten. */
  declare link: string | null;
  declare state: CreationOptional<'waiting' | 'sent' | 'failed'>;
  declare attempts: CreationOptional<number>;
  declare error: CreationOptional<string | null>;
  /** When to try again; null unless waiting. */
  declare nextAttemptAt: Date | null;

  static define(sequelize: Sequelize): void {
    const text = { type: DataTypes.TEXT, allowNull: false };
    const maybe = { type: DataTypes.TEXT, allowNull: true };
    this.init(
      {
        id: { type: DataTypes.INTEGER, primaryKey: true, autoIncrement: true },
        createdAt: { type: DataTypes.DATE, allowNull: false },
        recipient: text,
        subject: text,
        body: text,
        link: maybe,
        state: { ...text, defaultValue: 'waiting' },
        attempts: { type: DataTypes.INTEGER, allowNull: false, defaultValue: 0 },
        error: maybe,
        nextAttemptAt: { type: DataTypes.DATE, allowNull: true },
      },
      { sequelize, tableName: 'mails', underscored: true, timestamps: false },
    );
  }
}
