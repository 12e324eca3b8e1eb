import { type Sequelize } from 'sequelize';
import { STREAMS } from '@halfdeep/contracts';
import { allRaw, openSqlite, type RawDatabase, rawHandle, runRaw } from '../sqlite';
import { RUN_FILE_VERSION, type RunFileMeta, type Watermarks } from './layout';

/** A run file that cannot be used as it is: no such file, another version, or not a run file. */
export class RunFileError extends Error {
  override readonly name = 'RunFileError';
}

/** One raw SQLite handle on a run file with a lock, so that transactions of concurrent callers do not interleave. */
export class RunFileHandle {
  private tail: Promise<unknown> = Promise.resolve();

  private constructor(
    private readonly sequelize: Sequelize,
    private readonly database: RawDatabase,
  ) {}

  /** `path` must be absolute. Read-only handles fail when there is no file. */
  static async open(path: string, options: { readOnly?: boolean } = {}): Promise<RunFileHandle> {
    const sequelize = openSqlite(path, options);
    try {
      return new RunFileHandle(sequelize, await rawHandle(sequelize));
    } catch (error) {
      if (options.readOnly) throw new RunFileError(`There is no run file at ${path}.`, { cause: error });
      throw error;
    }
  }

  run(sql: string, parameters: unknown[] = []): Promise<number> {
    return runRaw(this.database, sql, parameters);
  }

  all<T>(sql: string, parameters: unknown[] = []): Promise<T[]> {
    return allRaw<T>(this.database, sql, parameters);
  }

  /** Runs `work` when everything asked before has ended. */
  exclusive<T>(work: () => Promise<T>): Promise<T> {
    const turn = this.tail.then(work, work);
    this.tail = turn.catch(() => undefined);
    return turn;
  }

  /** A transaction of its own; `begin` is IMMEDIATE for writers and DEFERRED (one snapshot) for readers. */
  transaction<T>(begin: 'IMMEDIATE' | 'DEFERRED', work: () => Promise<T>): Promise<T> {
    return this.exclusive(async () => {
      await this.run(`BEGIN ${begin}`);
      try {
        const result = await work();
        await this.run('COMMIT');
        return result;
      } catch (error) {
        // SQLite has rolled back by itself after some errors (a full disk); the first error is the one to tell.
        await this.run('ROLLBACK').catch(() => undefined);
        throw error;
      }
    });
  }

  async close(): Promise<void> {
    await this.exclusive(() => this.sequelize.close());
  }
}

/** Reads what was known when the file was made. RunFileError when it is no run file, or one of another version. */
export async function readMeta(handle: RunFileHandle): Promise<RunFileMeta> {
  const rows = await handle
    .all<{ key: string; value: string }>('SELECT key, value FROM meta')
    .catch((error: unknown) => {
      throw new RunFileError('This is not a run file: it has no table “meta”.', { cause: error });
    });
  const values = Object.fromEntries(rows.map(({ key, value }) => [key, JSON.parse(value) as unknown]));
  const version = values['schemaVersion'];
  if (version !== RUN_FILE_VERSION)
    throw new RunFileError(
      `The run file has layout version ${String(version)}; this program reads version ${RUN_FILE_VERSION}.`,
    );
  return values as unknown as RunFileMeta;
}

/** Reads how many records each stream holds. */
export async function readWatermarks(handle: RunFileHandle): Promise<Watermarks> {
  const rows = await handle.all<{ stream: number; rec: number; day: number | null }>(
    'SELECT stream, rec, day FROM progress',
  );
  const of = (stream: number) => {
    const row = rows.find((candidate) => candidate.stream === stream);
    return { records: row?.rec ?? 0, day: row?.day ?? NaN };
  };
  return Object.fromEntries(STREAMS.map((stream, number) => [stream, of(number)])) as Watermarks;
}
