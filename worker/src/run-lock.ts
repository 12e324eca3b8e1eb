import { execFileSync } from 'node:child_process';
import { readFileSync } from 'node:fs';
import { mkdir, open, readFile } from 'node:fs/promises';
import { dirname } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { unlinkIfThere } from '@halfdeep/store';

/** Names one process for good: a pid comes back, a pid with its start time does not. */
interface Holder {
  pid: number;
  startedAt: string;
}

/**
 * The right to write one run's files, held by one process: a file that names it. It survives a kill, and is then taken
 * over, since its holder is gone.
 */
export class RunLock {
  private constructor(private readonly path: string) {}

  /**
   * Takes the lock. A living holder (the orphan of a killed server, which saves and ends by itself) is given
   * `patienceMs`, then killed: it is known by pid and start time to be the process that took the lock.
   */
  static async acquire(path: string, patienceMs = 15_000): Promise<RunLock> {
    await mkdir(dirname(path), { recursive: true });
    const deadline = Date.now() + patienceMs;
    while (!(await tryTake(path))) {
      const holder = await readHolder(path);
      if (!holder || startOf(holder.pid) !== holder.startedAt) await unlinkIfThere(path);
      else if (Date.now() > deadline) killHolder(holder);
      await sleep(50);
    }
    return new RunLock(path);
  }

  async release(): Promise<void> {
    await unlinkIfThere(this.path);
  }
}

async function tryTake(path: string): Promise<boolean> {
  try {
    const file = await open(path, 'wx');
    const holder: Holder = { pid: process.pid, startedAt: startOf(process.pid) ?? '' };
    await file.writeFile(JSON.stringify(holder));
    await file.close();
    return true;
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'EEXIST') return false;
    throw error;
  }
}

/** Who holds the lock; null when the file went meanwhile or its writer died while writing it. */
async function readHolder(path: string): Promise<Holder | null> {
  try {
    const holder = JSON.parse(await readFile(path, 'utf8')) as Holder;
    return typeof holder.pid === 'number' && typeof holder.startedAt === 'string' ? holder : null;
  } catch (error) {
    if (error instanceof SyntaxError || (error as NodeJS.ErrnoException).code === 'ENOENT') return null;
    throw error;
  }
}

/** When a process started, in the system's own words; null when there is no such process (or it is a zombie). */
function startOf(pid: number): string | null {
  try {
    if (process.platform === 'linux') {
      const stat = readFileSync(`/proc/${pid}/stat`, 'utf8');
      // The name in parentheses may hold blanks; after it come state (field 3) and, at field 22, the start time.
      const fields = stat.slice(stat.lastIndexOf(')') + 2).split(' ');
      return fields[0] === 'Z' ? null : fields[19];
    }
    return execFileSync('ps', ['-o', 'lstart=', '-p', String(pid)], { encoding: 'utf8' }).trim() || null;
  } catch {
    return null; // no such process
  }
}

function killHolder(holder: Holder): void {
  try {
    process.kill(holder.pid, 'SIGKILL');
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code !== 'ESRCH') throw error;
  }
}
