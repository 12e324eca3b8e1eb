import { DataTypes, Model, type InferAttributes, type InferCreationAttributes, type Sequelize } from 'sequelize';

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

  static define(sequelize: Sequelize): void {
    const uuid = { type: DataTypes.UUID, allowNull: false };
    const date = { type: DataTypes.DATE, allowNull: false };
    this.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        personId: uuid,
        createdAt: date,
        expiresAt: date,
        endedAt: { type: DataTypes.DATE, allowNull: true },
        endedBecause: { type: DataTypes.TEXT, allowNull: true },
        address: { type: DataTypes.TEXT, allowNull: true },
      },
      { sequelize, tableName: 'sessions', underscored: true, timestamps: false },
    );
  }
}
