import { DataTypes, Model, type InferAttributes, type InferCreationAttributes, type Sequelize } from 'sequelize';

/** The answer that was given to a request with an Idempotency-Key, so that sending it again gives the same. */
export class RepeatedRequest extends Model<InferAttributes<RepeatedRequest>, InferCreationAttributes<RepeatedRequest>> {
  declare personId: string;
  declare key: string;
  /** Method, path and SHA-256 of the body: another request under the same key is a mistake. */
  declare request: string;
  declare status: number;
  /** The body of the answer, as JSON. */
  declare answer: string;
  declare at: Date;

  static define(sequelize: Sequelize): void {
    const text = { type: DataTypes.TEXT, allowNull: false };
    this.init(
      {
        personId: { type: DataTypes.UUID, primaryKey: true },
        key: { type: DataTypes.TEXT, primaryKey: true },
        request: text,
        status: { type: DataTypes.INTEGER, allowNull: false },
        answer: text,
        at: { type: DataTypes.DATE, allowNull: false },
      },
      { sequelize, tableName: 'repeated_requests', underscored: true, timestamps: false },
    );
  }
}
