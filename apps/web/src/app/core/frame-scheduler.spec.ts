import { oncePerFrame } from './frame-scheduler';

describe('oncePerFrame', () => {
  let now = 0;
  const nextFrame = () => {
    now += 16;
    vi.advanceTimersToNextFrame();
  };

  beforeEach(() => {
    vi.useFakeTimers({ toFake: ['requestAnimationFrame', 'cancelAnimationFrame'] });
    vi.spyOn(performance, 'now').mockImplementation(() => now);
  });
  afterEach(() => {
    vi.restoreAllMocks();
    vi.useRealTimers();
  });

  it('works once for many asks', () => {
    let done = 0;
    const drawing = oncePerFrame(() => done++);
    for (let k = 0; k < 5; k++) drawing.ask();
    expect(done).toBe(0);
    nextFrame();
    expect(done).toBe(1);
    nextFrame();
    expect(done).toBe(1);
  });

  it('leaves dear work of others to the next frame, and rests after it', () => {
    const order: string[] = [];
    const dear = (name: string) =>
      oncePerFrame(() => {
        order.push(name);
        now += 20;
      });
    const [first, second] = [dear('first'), dear('second')];
    first.ask();
    second.ask();
    nextFrame();
    expect(order).toEqual(['first']);
    first.ask();
    nextFrame();
    expect(order).toEqual(['first', 'second']);
    for (let k = 0; k < 8; k++) nextFrame();
    expect(order).toEqual(['first', 'second', 'first']);
  });

  it('forgets what was cancelled, and goes on after work that failed', () => {
    let done = 0;
    const cancelled = oncePerFrame(() => done++);
    cancelled.ask();
    cancelled.cancel();
    nextFrame();
    expect(done).toBe(0);
    const failing = oncePerFrame(() => {
      throw new Error('no canvas');
    });
    failing.ask();
    expect(() => nextFrame()).toThrowError('no canvas');
    cancelled.ask();
    nextFrame();
    expect(done).toBe(1);
  });
});
