import { RunFileReader } from './run-file-reader';

interface Entry {
  reader: Promise<RunFileReader>;
  users: number;
  /** Called when the last user has gone. */
  idle: (() => void)[];
}

/**
 * Keeps the readers used last open. A reader in use is never closed; one too many closes the one that was used longest
 * ago. Before a run file is deleted, `evict` it.
 */
export class RunFileCache {
  /** Oldest use first. */
  private readonly entries = new Map<string, Entry>();

  /** Capacity: open files, 32 to 64 suits a desk. */
  constructor(private readonly capacity = 48) {}

  get size(): number {
    return this.entries.size;
  }

  /** Opens the run file when it is not open, and lends its reader to `work`. RunFileError when there is none. */
  async use<T>(path: string, work: (reader: RunFileReader) => Promise<T>): Promise<T> {
    const entry = this.entries.get(path) ?? { reader: RunFileReader.open(path), users: 0, idle: [] };
    this.entries.delete(path);
    this.entries.set(path, entry);
    entry.users++;
    try {
      const reader = await entry.reader.catch((error: unknown) => {
        if (this.entries.get(path) === entry) this.entries.delete(path);
        throw error;
      });
      return await work(reader);
    } finally {
      entry.users--;
      if (entry.users === 0) entry.idle.splice(0).forEach((done) => done());
      await this.shrink();
    }
  }

  /** Closes a reader when its last user has gone; resolves when the file is free. */
  async evict(path: string): Promise<void> {
    const entry = this.entries.get(path);
    if (!entry) return;
    this.entries.delete(path);
    if (entry.users > 0) await new Promise<void>((done) => entry.idle.push(done));
    // A reader that never opened has told its user why, and has nothing to close.
    const reader = await entry.reader.catch(() => null);
    await reader?.close();
  }

  async close(): Promise<void> {
    for (const path of [...this.entries.keys()]) await this.evict(path);
  }

  private async shrink(): Promise<void> {
    for (const [path, entry] of this.entries) {
      if (this.entries.size <= this.capacity) return;
      if (entry.users === 0) await this.evict(path);
    }
  }
}
