/** What a thread calls of the compiled stepper. */
export interface BandKernel {
  bandStep(header: number, thread: number, step: number): void;
  bandCells(header: number, thread: number): void;
}

/**
 * The part of one thread in the steps that a header asks for: its band of rows, then the meeting of all, step by step.
 * `helper`: goes on from one call to the next until the team is dismissed.
 *
 * Helpers start from the text of this function, so it uses nothing but its arguments and has no function inside. Threads
 * meet here and not in the compiled kernel, because with WebAssembly's own waits some were seen to stay asleep under
 * Node.js 20, for a reason not found. A step takes tens of microseconds, so a thread looks 3000 times before it lies down; one
 * that meets nobody for ten minutes has lost another, and an error is better than waiting for ever.
 */
export function shareSteps(
  kernel: BandKernel,
  ints: Int32Array,
  header: number,
  thread: number,
  helper: boolean,
): void {
  const at = header / 4;
  const generationAt = at + 128;
  const arrivedAt = at + 144;
  const commandAt = at + 160;
  const readyAt = at + 176;
  let seen = Atomics.load(ints, commandAt);
  if (helper) {
    Atomics.add(ints, readyAt, 1);
    Atomics.notify(ints, readyAt);
  }
  do {
    if (helper) {
      for (let k = 0; k < 3000 && Atomics.load(ints, commandAt) === seen; k++);
      while (Atomics.load(ints, commandAt) === seen) Atomics.wait(ints, commandAt, seen);
      seen = (seen + 1) | 0;
      if (ints[at + 37] !== 0) return; // dismissed
    }
    const steps = ints[at + 29];
    const threads = ints[at + 32];
    // With sums, the v north of a nonlinear band is needed, which is the next band's: it is there after the meeting. Others
    // write neither level that these sums are made of before all have met again.
    const cells = ints[at + 30] !== 0 && ints[at + 34] !== 0;
    const meetings = cells ? steps + 1 : steps;
    for (let n = 0; n < meetings; n++) {
      if (n < steps) kernel.bandStep(header, thread, n);
      const generation = Atomics.load(ints, generationAt);
      if (Atomics.add(ints, arrivedAt, 1) === threads - 1) {
        Atomics.store(ints, arrivedAt, 0);
        Atomics.add(ints, generationAt, 1);
        Atomics.notify(ints, generationAt);
      } else {
        for (let k = 0; k < 3000 && Atomics.load(ints, generationAt) === generation; k++);
        while (Atomics.load(ints, generationAt) === generation)
          if (Atomics.wait(ints, generationAt, generation, 600_000) === 'timed-out')
            throw new Error('A thread of the stepper has not come for ten minutes.');
      }
      if (cells && n < steps) kernel.bandCells(header, thread);
    }
  } while (helper);
}

/** Asks the helpers of a team for their part. */
export function callHelpers(ints: Int32Array, header: number): void {
  Atomics.add(ints, header / 4 + 160, 1);
  Atomics.notify(ints, header / 4 + 160);
}

/** Waits until `helpers` helpers are there; false when they are not after `patienceMs`. */
export function awaitHelpers(ints: Int32Array, header: number, helpers: number, patienceMs: number): boolean {
  const readyAt = header / 4 + 176;
  const until = performance.now() + patienceMs;
  for (;;) {
    const there = Atomics.load(ints, readyAt);
    const left = until - performance.now();
    if (there >= helpers) return true;
    if (left <= 0) return false;
    Atomics.wait(ints, readyAt, there, left);
  }
}
