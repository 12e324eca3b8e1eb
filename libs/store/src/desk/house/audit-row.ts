import {
  DataTypes,
  Model,
  type CreationOptional,
  type InferAttributes,
  type InferCreationAttributes,
  type Sequelize,
} from 'sequelize';

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
    const text = { type: DataTypes.TEXT, allowNull: false };
    const maybe = { type: DataTypes.TEXT, allowNull: true };
    this.init(
      {
        id: { type: DataTypes.INTEGER, primaryKey: true, autoIncrement: true },
        at: { type: DataTypes.DATE, allowNull: false },
        actorId: { type: DataTypes.UUID, allowNull: true },
        actorName: maybe,
        action: text,
        subject: text,
        detail: text,
        address: maybe,
      },
      { sequelize, tableName: 'audit', underscored: true, timestamps: false },
    );
  }
}
