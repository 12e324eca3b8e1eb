import { Model, type InferAttributes, type InferCreationAttributes, type Sequelize } from 'sequelize';
import { instant, text, uuid } from '../columns';

export type TokenPurpose = 'reset' | 'invitation' | 'first-admin';

/** A token sent in a link: kept as SHA-256, good once and until it expires. */
export class OneUseToken extends Model<InferAttributes<OneUseToken>, InferCreationAttributes<OneUseToken>> {
  declare hash: string;
  declare purpose: TokenPurpose;
  /** Null for the link that makes the first admin, who is nobody yet. */
  declare personId: string | null;
  declare createdAt: Date;
  declare expiresAt: Date;
  /** When it was used, or withdrawn. */
  declare usedAt: Date | null;
  /** Who sent the invitation; null for the system. */
  declare issuedBy: string | null;

  static define(sequelize: Sequelize): void {
    this.init(
      {
        hash: { ...text(), primaryKey: true },
        purpose: text(),
        personId: uuid('maybe'),
        createdAt: instant(),
        expiresAt: instant(),
        usedAt: instant('maybe'),
        issuedBy: text('maybe'),
      },
      { sequelize, tableName: 'one_use_tokens', underscored: true, timestamps: false },
    );
  }
}
