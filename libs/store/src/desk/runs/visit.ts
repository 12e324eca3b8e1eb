import { DataTypes, Model, type InferAttributes, type InferCreationAttributes, type Sequelize } from 'sequelize';

/** When a person last looked at the desk (`seenAt`), and what that visit counts as new from (`since`; null: first visit). */
export class Visit extends Model<InferAttributes<Visit>, InferCreationAttributes<Visit>> {
  declare personId: string;
  declare seenAt: Date;
  declare since: Date | null;

  static define(sequelize: Sequelize): void {
    this.init(
      {
        personId: { type: DataTypes.UUID, primaryKey: true },
        seenAt: { type: DataTypes.DATE, allowNull: false },
        since: { type: DataTypes.DATE, allowNull: true },
      },
      { sequelize, tableName: 'visits', underscored: true, timestamps: false },
    );
  }
}
