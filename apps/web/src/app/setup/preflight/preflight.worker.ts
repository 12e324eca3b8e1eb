import { judge, type PreflightAnswer, type PreflightQuestion } from './judge';

// A thread of its own: however large the grid, typing never waits for preflight.
addEventListener('message', ({ data: { number, setup, context } }: MessageEvent<PreflightQuestion>) => {
  postMessage({ number, ...judge(setup, context) } satisfies PreflightAnswer);
});
