import { Model, type InferAttributes, type InferCreationAttributes, type Sequelize, type Transaction } from 'sequelize';
import { text } from '../columns';

/** What the desk remembers about itself, by key, as JSON: the cap on runs at once, whether this is the demonstration, … */
export class DeskSetting extends Model<InferAttributes<DeskSetting>, InferCreationAttributes<DeskSetting>> {
  declare key: string;
  declare value: string;

  static define(sequelize: Sequelize): void {
    this.init(
      { key: { ...text(), primaryKey: true }, value: text() },
      { sequelize, tableName: 'settings', underscored: true, timestamps: false },
    );
  }

  /** The value under `key`, or `undefined` when nothing was kept there. The caller checks its shape. */
  static async read(key: string, transaction?: Transaction): Promise<unknown> {
    const row = await this.findByPk(key, { transaction });
    return row ? (JSON.parse(row.value) as unknown) : undefined;
  }

  /** Keeps `value` under `key`, in the caller's transaction. */
  static async keep(key: string, value: unknown, transaction: Transaction): Promise<void> {
    await this.upsert({ key, value: JSON.stringify(value) }, { transaction });
  }
}
