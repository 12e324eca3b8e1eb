import { randomUUID } from 'node:crypto';
import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { openSqlite } from '../sqlite';
import { DeskSetting, Person, PersonRole } from './index';
import { openDesk, type DeskDatabase } from './desk-database';
import { deskMigrator } from './migrate';
import { DESK_SCHEMA } from './schema';

let folder: string;
let desk: DeskDatabase | undefined;
beforeEach(async () => {
  folder = await mkdtemp(join(tmpdir(), 'halfdeep-desk-'));
});
afterEach(async () => {
  await desk?.close();
  desk = undefined;
  await rm(folder, { recursive: true, force: true });
});

const file = () => join(folder, 'desk.sqlite');
const keep = (key: string, value: unknown) => desk!.write((transaction) => DeskSetting.keep(key, value, transaction));

describe('the desk database', () => {
  it('keeps what was written over a close and a second opening', async () => {
    desk = await openDesk(file());
    await keep('cap', 2);
    await desk.close();
    desk = await openDesk(file());
    expect(await DeskSetting.read('cap')).toBe(2);
    expect(await DeskSetting.read('never kept')).toBeUndefined();
  });

  it('undoes every migration of an empty database and does them again', async () => {
    const sequelize = openSqlite(file());
    const migrations = DESK_SCHEMA.flatMap((part) => part.migrations);
    const migrator = deskMigrator(sequelize, migrations);
    const tables = async () => (await sequelize.getQueryInterface().showAllTables()).sort();
    await migrator.up();
    const full = await tables();
    await migrator.down({ to: 0 });
    expect(await tables()).toEqual(['desk_migrations']);
    await migrator.up();
    expect(await tables()).toEqual(full);
    expect(full).toContain('people');
    await sequelize.close();
  });

  it('leaves nothing of a migration that fails half-way', async () => {
    const sequelize = openSqlite(file());
    const migrator = deskMigrator(sequelize, [
      {
        name: 'half',
        up: async (query) => {
          await query.sequelize.query('CREATE TABLE half (id INTEGER)');
          throw new Error('the disk went away');
        },
        down: () => Promise.resolve(),
      },
    ]);
    await expect(migrator.up()).rejects.toThrow('the disk went away');
    expect(await sequelize.getQueryInterface().showAllTables()).toEqual(['desk_migrations']);
    await sequelize.close();
  });

  it('refuses a file that a newer program has migrated', async () => {
    desk = await openDesk(file());
    await desk.sequelize.query(`INSERT INTO desk_migrations VALUES ('2999.01.01T00.00.00-from-later', '')`);
    await desk.close();
    desk = undefined;
    await expect(openDesk(file())).rejects.toThrow(/newer Halfdeep \(2999/);
  });

  it('refuses a second database while one is open', async () => {
    desk = await openDesk(file());
    await expect(openDesk(join(folder, 'other.sqlite'))).rejects.toThrow(/close it before opening/);
  });

  it('lets one write transaction run at a time, in the order they came', async () => {
    desk = await openDesk(file());
    const order: string[] = [];
    const slow = (name: string) =>
      desk!.write(async (transaction) => {
        order.push(`${name} begins`);
        await DeskSetting.keep(name, 1, transaction);
        await new Promise((wake) => setTimeout(wake, 5));
        order.push(`${name} ends`);
      });
    await Promise.all(['a', 'b', 'c', 'd', 'e', 'f'].map(slow));
    expect(order).toEqual(['a', 'b', 'c', 'd', 'e', 'f'].flatMap((name) => [`${name} begins`, `${name} ends`]));
  });

  it('rolls a failed write back, and goes on with the next', async () => {
    desk = await openDesk(file());
    const failing = desk.write(async (transaction) => {
      await DeskSetting.keep('half', 1, transaction);
      throw new Error('no');
    });
    const next = keep('whole', 2);
    await expect(failing).rejects.toThrow('no');
    await next;
    expect(await DeskSetting.read('half')).toBeUndefined();
    expect(await DeskSetting.read('whole')).toBe(2);
  });

  it('lets a write inside a write join it', async () => {
    desk = await openDesk(file());
    const outer = desk.write(async () => {
      await keep('inner', 1);
      throw new Error('no');
    });
    await expect(outer).rejects.toThrow('no');
    expect(await DeskSetting.read('inner')).toBeUndefined();
  });

  it('holds its rules in the tables: addresses once and in lower case, known roles and states', async () => {
    desk = await openDesk(file());
    const person = (email: string, state: 'invited' | 'active' = 'invited') =>
      desk!.write((transaction) =>
        Person.create(
          { id: randomUUID(), email, name: 'N', state, passwordHash: null, createdAt: new Date() },
          { transaction },
        ),
      );
    const one = await person('a@halfdeep.example');
    expect(await refusal(person('a@halfdeep.example'))).toContain('UNIQUE');
    expect(await refusal(person('B@halfdeep.example'))).toContain('CHECK');
    expect(await refusal(person('c@halfdeep.example', 'active'))).toContain('CHECK'); // without a password
    const role = (name: string) =>
      desk!.write((transaction) => PersonRole.create({ personId: one.id, role: name as 'admin' }, { transaction }));
    await role('admin');
    expect(await refusal(role('owner'))).toContain('CHECK');
  });
});

/** What SQLite said when it refused; fails when it did not. */
const refusal = (write: Promise<unknown>): Promise<string> =>
  write.then(
    () => 'it was accepted',
    (error: { parent?: Error }) => String(error.parent?.message),
  );
