import { type Sequelize } from 'sequelize';
import { type SchemaPart } from '../schema';
import { AuditRow } from './audit-row';
import { DeskSetting } from './desk-setting';
import { Mail } from './mail';
import { createHouseKeeping } from './migrations/2026.12.01T06.47.00-create-house-keeping';
import { RepeatedRequest } from './repeated-request';

export * from './audit-row';
export * from './desk-setting';
export * from './mail';
export * from './repeated-request';

/** The outbox, the audit trail, what the desk remembers about itself, and answers to repeated requests. */
export const houseSchema: SchemaPart = {
  define(sequelize: Sequelize): void {
    for (const model of [Mail, AuditRow, DeskSetting, RepeatedRequest]) model.define(sequelize);
  },
  migrations: [createHouseKeeping],
};
