export * from './accounts/accounts-schema';
export * from './desk-database';
export * from './house/house-schema';
export type * from './migration';
export * from './runs/runs-schema';
export { deskMigrator } from './migrate';
export { DESK_SCHEMA, type SchemaPart } from './schema';
