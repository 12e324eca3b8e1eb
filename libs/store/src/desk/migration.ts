import { type QueryInterface } from 'sequelize';

/** One step of the desk database's schema. It imports no model; `down` throws when undoing would lose data. */
export interface Migration {
  /** Timestamped, as in `2026.12.01T06.45.00-create-people`; migrations run in the order of their names. */
  name: string;
  up(query: QueryInterface): Promise<void>;
  down(query: QueryInterface): Promise<void>;
}
