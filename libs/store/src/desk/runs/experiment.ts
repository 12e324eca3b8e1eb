import { DataTypes, Model, type InferAttributes, type InferCreationAttributes, type Sequelize } from 'sequelize';

/** A question, its runs, and who keeps it. `moved` says what moved last, in words: "Strong finished". */
export class Experiment extends Model<InferAttributes<Experiment>, InferCreationAttributes<Experiment>> {
  declare id: string;
  declare ownerId: string;
  declare question: string;
  declare notes: string;
  declare createdAt: Date;
  declare movedAt: Date;
  declare moved: string;

  static define(sequelize: Sequelize): void {
    this.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        ownerId: { type: DataTypes.UUID, allowNull: false },
        question: { type: DataTypes.TEXT, allowNull: false },
        notes: { type: DataTypes.TEXT, allowNull: false },
        createdAt: { type: DataTypes.DATE, allowNull: false },
        movedAt: { type: DataTypes.DATE, allowNull: false },
        moved: { type: DataTypes.TEXT, allowNull: false },
      },
      { sequelize, tableName: 'experiments', underscored: true, timestamps: false },
    );
  }
}
