/** Seconds of CPU that this process has used so far, all threads: what others compute meanwhile does not count. */
export function cpuSeconds(): number {
  const { user, system } = process.cpuUsage();
  return (user + system) / 1e6;
}

/** Runs `work` and returns its CPU seconds. */
export async function timed(work: () => void | Promise<void>): Promise<number> {
  const before = cpuSeconds();
  await work();
  return cpuSeconds() - before;
}

/** `text` in a column of `width`. */
export function cell(text: string | number, width: number): string {
  return (typeof text === 'number' ? String(Number(text.toPrecision(3))) : text).padStart(width);
}
