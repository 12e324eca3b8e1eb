import { Model, type InferAttributes, type InferCreationAttributes, type Sequelize } from 'sequelize';
import { instant, text, uuid, whole } from '../columns';

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
    this.init(
      {
        personId: { ...uuid(), primaryKey: true },
        key: { ...text(), primaryKey: true },
        request: text(),
        status: whole(),
        answer: text(),
        at: instant(),
      },
      { sequelize, tableName: 'repeated_requests', underscored: true, timestamps: false },
    );
  }
}
