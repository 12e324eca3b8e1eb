import type { ConvergenceCoast, ConvergenceRole } from '@halfdeep/contracts';
import { DataTypes, Model, type InferAttributes, type InferCreationAttributes, type Sequelize } from 'sequelize';

/** Ties a run to the one whose setup it computes at another resolution. Goes with either of the two. */
export class ConvergenceRun extends Model<InferAttributes<ConvergenceRun>, InferCreationAttributes<ConvergenceRun>> {
  declare baseRunId: string;
  declare coast: ConvergenceCoast;
  declare role: ConvergenceRole;
  declare runId: string;

  static define(sequelize: Sequelize): void {
    this.init(
      {
        baseRunId: { type: DataTypes.UUID, primaryKey: true },
        coast: { type: DataTypes.TEXT, primaryKey: true },
        role: { type: DataTypes.TEXT, primaryKey: true },
        runId: { type: DataTypes.UUID, allowNull: false },
      },
      { sequelize, tableName: 'convergence_runs', underscored: true, timestamps: false },
    );
  }
}
