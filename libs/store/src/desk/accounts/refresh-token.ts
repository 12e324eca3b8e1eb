import { Model, type InferAttributes, type InferCreationAttributes, type Sequelize } from 'sequelize';
import { instant, text, uuid } from '../columns';

/** A refresh token by its SHA-256. Once rotated it stays known, so that using it again gives the theft away. */
export class RefreshToken extends Model<InferAttributes<RefreshToken>, InferCreationAttributes<RefreshToken>> {
  declare hash: string;
  declare sessionId: string;
  declare issuedAt: Date;
  declare rotatedAt: Date | null;

  static define(sequelize: Sequelize): void {
    this.init(
      {
        hash: { ...text(), primaryKey: true },
        sessionId: uuid(),
        issuedAt: instant(),
        rotatedAt: instant('maybe'),
      },
      { sequelize, tableName: 'refresh_tokens', underscored: true, timestamps: false },
    );
  }
}
