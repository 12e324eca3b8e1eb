/**
 * Runs `work` at an animation frame, at most once a frame however often it is asked for; what the last ask left behind
 * is what gets drawn. Work that costs more than a frame is followed by a rest as long as itself, so that a page with
 * many growing plates still answers. `cancel` forgets a waiting ask.
 */
export function oncePerFrame(work: () => void): { ask: () => void; cancel: () => void } {
  let handle: number | null = null;
  let notBefore = 0;
  const turn = () => {
    const started = performance.now();
    if (started < notBefore) {
      handle = requestAnimationFrame(turn);
      return;
    }
    handle = null;
    work();
    const cost = performance.now() - started;
    notBefore = cost > 16 ? performance.now() + cost : 0;
  };
  return {
    ask: () => {
      handle ??= requestAnimationFrame(turn);
    },
    cancel: () => {
      if (handle !== null) cancelAnimationFrame(handle);
      handle = null;
    },
  };
}
