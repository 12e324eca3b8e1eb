import type { Progress, QueuedReason, RunFailure, RunState } from '@halfdeep/contracts';
import { withLaterFields, type Fingerprint, type Preflight, type Setup, type SetupChange } from '@halfdeep/ocean';
import { DataTypes, Model, type InferAttributes, type InferCreationAttributes, type Sequelize } from 'sequelize';

export type Descent = 'control' | 'sensitivity' | 'extension';

/**
 * One integration of one setup. The setup, what preflight said of it, and the descent never change after the row is
 * made (a trigger holds that); the rest is the run's life, and this table is the one truth about it.
 */
export class Run extends Model<InferAttributes<Run>, InferCreationAttributes<Run>> {
  declare id: string;
  declare experimentId: string;
  declare ownerId: string;
  declare label: string;
  declare setup: Setup;
  declare preflight: Preflight;
  declare nx: number;
  declare ny: number;
  /** Null for a control, or when the parent was deleted: label and changes stay. */
  declare parentRunId: string | null;
  declare parentLabel: string | null;
  declare descent: Descent;
  declare changes: SetupChange[];
  declare state: RunState;
  declare queuedReason: QueuedReason | null;
  /** Place among the waiting, ascending; null when the run does not wait. */
  declare queueOrder: number | null;
  declare failure: RunFailure | null;
  /** Deaths of the worker since the last new checkpoint. */
  declare deaths: number;
  declare createdAt: Date;
  declare queuedAt: Date | null;
  declare startedAt: Date | null;
  declare endedAt: Date | null;
  declare progress: Progress;
  declare fingerprint: Fingerprint | null;
  /** SHA-256 and absolute step of the last-state file of a finished run: what an extension starts from. */
  declare stateSha256: string | null;
  declare lastStep: number | null;
  declare diskBytes: number | null;
  declare workerPid: number | null;

  static define(sequelize: Sequelize): void {
    const text = { type: DataTypes.TEXT, allowNull: false };
    const whole = { type: DataTypes.INTEGER, allowNull: false };
    const instant = { type: DataTypes.DATE, allowNull: true };
    const json = { type: DataTypes.JSON, allowNull: false };
    this.init(
      {
        id: { type: DataTypes.UUID, primaryKey: true },
        experimentId: { type: DataTypes.UUID, allowNull: false },
        ownerId: { type: DataTypes.UUID, allowNull: false },
        label: { ...text },
        setup: {
          ...json,
          // Rows of earlier releases lack the fields that came since; a row is never rewritten.
          get(this: Run): Setup {
            const kept = this.getDataValue('setup') as Setup | undefined;
            return (kept && withLaterFields(kept)) as Setup;
          },
        },
        preflight: { ...json },
        nx: { ...whole },
        ny: { ...whole },
        parentRunId: { type: DataTypes.UUID, allowNull: true },
        parentLabel: { type: DataTypes.TEXT, allowNull: true },
        descent: { ...text },
        changes: { ...json },
        state: { ...text },
        queuedReason: { type: DataTypes.TEXT, allowNull: true },
        queueOrder: { type: DataTypes.DOUBLE, allowNull: true },
        failure: { type: DataTypes.JSON, allowNull: true },
        deaths: { ...whole, defaultValue: 0 },
        createdAt: { type: DataTypes.DATE, allowNull: false },
        queuedAt: { ...instant },
        startedAt: { ...instant },
        endedAt: { ...instant },
        progress: { ...json },
        fingerprint: { type: DataTypes.JSON, allowNull: true },
        stateSha256: { type: DataTypes.TEXT, allowNull: true },
        lastStep: { type: DataTypes.INTEGER, allowNull: true },
        diskBytes: { type: DataTypes.BIGINT, allowNull: true },
        workerPid: { type: DataTypes.INTEGER, allowNull: true },
      },
      { sequelize, tableName: 'runs', underscored: true, timestamps: false },
    );
  }
}
