/** Drawing may take so much of a frame before the rest is left to the next one, ms. */
const FRAME_BUDGET_MS = 8;
/** Work that took c ms rests 2c before it is done again: growing plates leave most of the time to the reader. */
const REST = 2;

interface Job {
  work: () => void;
  notBefore: number;
}

const waiting = new Set<Job>();
let handle: number | null = null;

function schedule(): void {
  handle ??= requestAnimationFrame(turn);
}

/** One frame: jobs in the order in which they were asked, until the budget is spent; the others keep their place. */
function turn(): void {
  handle = null;
  const began = performance.now();
  // Asked for first, so that work that throws does not take what waits behind it along.
  if (waiting.size > 1) schedule();
  for (const job of [...waiting]) {
    const started = performance.now();
    if (started - began > FRAME_BUDGET_MS) break;
    if (started < job.notBefore) continue;
    waiting.delete(job);
    try {
      job.work();
    } finally {
      const ended = performance.now();
      job.notBefore = ended + REST * (ended - started);
    }
  }
  if (waiting.size > 0) schedule();
}

/**
 * Runs `work` at an animation frame, at most once a frame however often it is asked for; what the last ask left behind
 * is what gets done. All work of the page shares each frame, so that ten growing plates are not one long pause.
 * `cancel` forgets a waiting ask.
 */
export function oncePerFrame(work: () => void): { ask: () => void; cancel: () => void } {
  const job: Job = { work, notBefore: 0 };
  return {
    ask: () => {
      waiting.add(job);
      schedule();
    },
    cancel: () => {
      waiting.delete(job);
    },
  };
}
