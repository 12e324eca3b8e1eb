import { type Experiment, type HalfdeepEvent, type Run } from '@halfdeep/contracts';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
  endlessSetup,
  newExperiment,
  newRun,
  reach,
  smallSetup,
  startRunApi,
  until,
  type Hand,
  type RunApi,
} from './run-harness';

interface Heard {
  events: HalfdeepEvent[];
  ids: string[];
  headers: Headers;
  /** Resolves when the server has ended the stream. */
  ended: Promise<void>;
  stop(): void;
}

describe('the event stream', () => {
  let api: RunApi;
  let hand: Hand;
  let experiment: Experiment;

  beforeAll(async () => {
    api = await startRunApi();
    hand = await api.person('mara', 'modeller');
    experiment = await newExperiment(hand);
  });
  afterAll(() => api.close());

  /** Listens as a browser would, and holds every event against its name. */
  async function listen(who: Hand, runs: string[], headers: Record<string, string> = {}): Promise<Heard> {
    const abort = new AbortController();
    const answer = await fetch(`${api.url}/api/events?runs=${runs.join(',')}`, {
      headers: { authorization: `Bearer ${who.token}`, ...headers },
      signal: abort.signal,
    });
    expect(answer.status).toBe(200);
    const heard: Heard = {
      events: [],
      ids: [],
      headers: answer.headers,
      ended: Promise.resolve(),
      stop: () => abort.abort(),
    };
    const read = async () => {
      let text = '';
      const decoder = new TextDecoder();
      for await (const chunk of answer.body as unknown as AsyncIterable<Uint8Array>) {
        text += decoder.decode(chunk, { stream: true });
        const blocks = text.split('\n\n');
        text = blocks.pop()!;
        for (const block of blocks) {
          const fields = Object.fromEntries(block.split('\n').map((line) => line.split(/: (.*)/s).slice(0, 2)));
          if (!fields['data']) continue;
          const event = JSON.parse(fields['data']) as HalfdeepEvent;
          expect(fields['event']).toBe(event.type);
          heard.events.push(event);
          heard.ids.push(fields['id']);
        }
      }
    };
    heard.ended = read().catch((error: Error) => {
      if (error.name !== 'AbortError') throw error;
    });
    return heard;
  }
  const of = <T extends HalfdeepEvent['type']>(heard: Heard, type: T) =>
    heard.events.filter((event): event is Extract<HalfdeepEvent, { type: T }> => event.type === type);
  const eventually = (check: () => boolean) =>
    until(
      () => Promise.resolve(check()),
      (done) => done,
    );

  it('tells the whole life of a run; the records never run ahead of the file and end where it ends', async () => {
    await api.services.runs.queue.setPaused(true);
    const { id } = await newRun(hand, experiment.id, smallSetup(200));
    const heard = await listen(hand, [id]);
    expect(heard.headers.get('content-type')).toMatch(/^text\/event-stream/);
    expect(heard.headers.get('content-encoding')).toBeNull();
    expect(heard.headers.get('cache-control')).toMatch(/no-transform/);
    await eventually(() => of(heard, 'queue').length > 0);
    expect(heard.events.slice(0, 3).map((event) => event.type)).toEqual(['state', 'records', 'queue']);
    expect(of(heard, 'state')[0].run).toMatchObject({ id, state: 'queued', queuePosition: 1, can: { stop: true } });
    await api.services.runs.queue.setPaused(false);
    await eventually(() => of(heard, 'state').some(({ run }) => run.state === 'finished'));
    const finished = await reach(hand, id, 'finished');
    await eventually(() => of(heard, 'records').at(-1)?.records.frames === finished.progress.records.frames);
    heard.stop();

    const states = of(heard, 'state').map(({ run }) => run.state);
    expect(states.filter((state, k) => state !== states[k - 1])).toEqual(['queued', 'running', 'finished']);
    const frames = of(heard, 'records').map(({ records }) => records.frames);
    expect(frames).toEqual([...frames].sort((a, b) => a - b));
    expect(of(heard, 'records').at(-1)!.records).toEqual(finished.progress.records);
    expect(of(heard, 'progress').at(-1)!.progress.step).toBe(finished.progress.totalSteps);
    expect(new Set(heard.ids).size).toBe(heard.ids.length);
  });

  it('begins for a late or reconnecting listener with what all others have', async () => {
    const { id } = await newRun(hand, experiment.id, endlessSetup());
    const early = await listen(hand, [id]);
    await eventually(() => (of(early, 'records').at(-1)?.records.frames ?? 0) > 20);
    const late = await listen(hand, [id], { 'last-event-id': early.ids[0] });
    await eventually(() => of(late, 'records').length > 0);
    expect(of(late, 'state')[0].run).toMatchObject({ id, state: 'running' });
    expect(of(late, 'records')[0].records.frames).toBeGreaterThan(20);
    await hand.post(`/api/runs/${id}/stop`).expect(202);
    const at = Date.now();
    await eventually(() => of(late, 'state').at(-1)?.run.state === 'stopped');
    expect(Date.now() - at).toBeLessThan(5000);
    const saved = await until(
      async () => (await hand.get(`/api/runs/${id}`)).body as Run,
      (run) => run.progress.savedStep !== null,
    );
    const last = (heard: Heard) => of(heard, 'records').at(-1)?.records;
    await eventually(() => [early, late].every((heard) => last(heard)?.frames === saved.progress.records.frames));
    expect(last(late)).toEqual(last(early));
    early.stop();
    late.stop();
  });

  it('tells queue events to everybody signed in, and of no run that was not asked', async () => {
    const reviewer = await api.person('ravi', 'reviewer');
    const heard = await listen(reviewer, []);
    await eventually(() => of(heard, 'queue').length > 0);
    const { id } = await newRun(hand, experiment.id, smallSetup(3));
    await reach(hand, id, 'finished');
    await eventually(() => of(heard, 'queue').length > 2);
    heard.stop();
    expect(new Set(heard.events.map((event) => event.type))).toEqual(new Set(['queue']));
  });

  it('shows each listener their own rights', async () => {
    const reviewer = await api.person('rosa', 'reviewer');
    const { id } = await newRun(hand, experiment.id, smallSetup(3));
    await reach(hand, id, 'finished');
    const heard = await listen(reviewer, [id]);
    await eventually(() => of(heard, 'state').length > 0);
    heard.stop();
    expect(Object.values(of(heard, 'state')[0].run.can)).toEqual(Array<boolean>(6).fill(false));
  });

  it('ends with the session', async () => {
    const guest = await api.person('gil', 'modeller');
    const heard = await listen(guest, []);
    await eventually(() => of(heard, 'queue').length > 0);
    await guest.delete('/api/session').expect(204);
    await heard.ended;
    await guest.get('/api/events').expect(401);
  });

  it('refuses what is no run id', async () => {
    await hand.get('/api/events?runs=tides').expect(400);
  });

  it('leaves runs out that are gone, and tells of the others', async () => {
    const gone = await newRun(hand, experiment.id, smallSetup(3));
    await reach(hand, gone.id, 'finished');
    await hand.delete(`/api/runs/${gone.id}`).expect(204);
    const { id } = await newRun(hand, experiment.id, smallSetup(3));
    const heard = await listen(hand, ['00000000-0000-4000-8000-000000000000', gone.id, id]);
    await eventually(() => of(heard, 'state').some(({ run }) => run.state === 'finished'));
    await eventually(() => of(heard, 'queue').length > 0);
    heard.stop();
    expect(new Set(of(heard, 'state').map(({ run }) => run.id))).toEqual(new Set([id]));
    expect(new Set(of(heard, 'records').map(({ runId }) => runId))).toEqual(new Set([id]));
  });
});
