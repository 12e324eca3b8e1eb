import { type Sequelize } from 'sequelize';
import { accountsSchema } from './accounts/accounts-schema';
import { houseSchema } from './house/house-schema';
import { type Migration } from './migration';
import { runsSchema } from './runs/runs-schema';

/** What one feature keeps in the desk database: its models and the migrations that make their tables. */
export interface SchemaPart {
  /** Binds the part's model classes to the open database, associations included. */
  define(sequelize: Sequelize): void;
  migrations: readonly Migration[];
}

/** Every part, in the order in which models may refer to each other. Imported statically, so that a bundle carries them. */
export const DESK_SCHEMA: readonly SchemaPart[] = [accountsSchema, houseSchema, runsSchema];
