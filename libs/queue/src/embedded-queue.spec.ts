import { afterEach, describe, expect, it, vi } from 'vitest';
import { fileURLToPath } from 'node:url';
import type { Setup } from '@halfdeep/ocean';
import { EmbeddedQueue } from './embedded-queue';
import type { EmbeddedQueueOptions } from './queue-options';
import type { RunQueueEvent } from './run-queue';
import { MemoryLedger } from './testing/memory-ledger';

// The machine may be busy: none of these measures time.
vi.setConfig({ testTimeout: 60_000 });

type Script = 'finish' | 'work' | 'stubborn' | 'die' | 'saveAndDie' | 'full' | 'fail';
const worker = { path: fileURLToPath(new URL('./testing/scripted-worker.mjs', import.meta.url)) };
const scripted = (script: Script) => ({ script }) as unknown as Setup;

let open: EmbeddedQueue[] = [];
afterEach(async () => {
  for (const queue of open) await queue.close();
  open = [];
});

/** A started queue on a ledger in memory, with everything it tells. */
async function queueOn(ledger: MemoryLedger, options: Partial<EmbeddedQueueOptions> = {}) {
  const queue = new EmbeddedQueue({ ledger, varDir: '/nowhere', worker, closeSeconds: 2, ...options });
  open.push(queue);
  const events: RunQueueEvent[] = [];
  queue.events$.subscribe((event) => events.push(event));
  await queue.start();
  const add = async (runId: string, script: Script) => {
    ledger.add(runId, scripted(script));
    await queue.enqueue(runId);
  };
  const states = (runId: string) =>
    events.flatMap((event) =>
      event.type === 'state' && event.runId === runId
        ? [event.queuedReason ? `${event.state}: ${event.queuedReason}` : event.state]
        : [],
    );
  return { queue, events, add, states };
}

async function until(what: () => boolean, seconds = 50): Promise<void> {
  const deadline = Date.now() + seconds * 1000;
  while (!what()) {
    if (Date.now() > deadline) throw new Error(`Not within ${seconds} s: ${what.toString()}`);
    await new Promise((resolve) => setTimeout(resolve, 10));
  }
}

describe('embedded queue', () => {
  it('computes what is queued, one after another, and tells states, progress and records', async () => {
    const ledger = new MemoryLedger();
    const { events, add, states, queue } = await queueOn(ledger);
    await add('a', 'finish');
    await add('b', 'finish');
    await until(() => ledger.get('a').state === 'finished' && ledger.get('b').state === 'finished');
    expect(states('a')).toEqual(['queued', 'running', 'finished']);
    expect(ledger.get('a').finished?.stateSha256).toBe('a'.repeat(64));
    expect(ledger.get('a').progress?.step).toBe(100);
    expect(
      events.filter((e) => e.type === 'records' && e.runId === 'a').map((e) => 'records' in e && e.records.frames),
    ).toEqual([1, 100]);
    await queue.released('b');
    expect(queue.workers()).toEqual([]);
    expect(await queue.summary()).toEqual({ cap: 1, paused: false, running: 0, waiting: 0 });
  });

  it('runs as many at once as the cap says, changed live', async () => {
    const ledger = new MemoryLedger({ cap: 1 });
    const { queue, add } = await queueOn(ledger);
    for (const id of ['a', 'b', 'c', 'd']) await add(id, 'work');
    const running = () => [...ledger.runs.values()].filter((r) => r.state === 'running').map((r) => r.runId);
    await until(() => queue.workers().length === 1);
    expect(running()).toEqual(['a']);
    await queue.setCap(3, 'drain');
    await until(() => queue.workers().length === 3);
    expect(running()).toEqual(['a', 'b', 'c']);
    await queue.setCap(2, 'drain');
    await new Promise((resolve) => setTimeout(resolve, 300));
    expect(running()).toEqual(['a', 'b', 'c']);
    await queue.stop('a');
    await queue.stop('b');
    await queue.released('a');
    await queue.released('b');
    await until(() => running().join() === 'c,d');
    expect(ledger.kept).toEqual({ cap: 2, paused: false, whenLowered: 'drain' });
    await expect(queue.setCap(0, 'drain')).rejects.toThrow(/1 to \d+; 0 arrived/);
  });

  it('checkpoints and requeues the youngest when the cap is lowered so', async () => {
    const ledger = new MemoryLedger({ cap: 3 });
    const { queue, add, states } = await queueOn(ledger);
    for (const id of ['a', 'b', 'c']) {
      await add(id, 'work');
      await until(() => ledger.get(id).progress !== null);
    }
    await queue.setCap(1, 'checkpoint');
    expect(['a', 'b', 'c'].map((id) => ledger.get(id).state)).toEqual(['running', 'queued', 'queued']);
    expect(ledger.order).toEqual(['b', 'c']);
    expect(ledger.get('c').queuedReason).toBe('cap lowered');
    await until(() => queue.workers().length === 1);
    expect(ledger.get('b').progress?.savedStep).toBe(12);
    await queue.setCap(3, 'drain');
    await until(() => queue.workers().length === 3);
    expect(states('b')).toEqual(['queued', 'running', 'queued: cap lowered', 'running']);
  });

  /** Lets `act` happen between the last look at a run before its worker is forked and the fork. */
  function beforeFork(ledger: MemoryLedger, runId: string, act: () => Promise<unknown>): void {
    const find = ledger.find;
    ledger.find = async (asked) => {
      const seen = structuredClone(await find(asked));
      if (asked === runId && seen?.state === 'running') {
        ledger.find = find;
        await act();
      }
      return seen;
    };
  }

  it('stops a run whose worker is just being forked', async () => {
    const ledger = new MemoryLedger();
    const { queue, add, states } = await queueOn(ledger);
    beforeFork(ledger, 'a', () => queue.stop('a'));
    await add('a', 'work');
    await until(() => states('a').includes('stopped'));
    await queue.released('a');
    expect(queue.workers()).toEqual([]);
    expect(ledger.get('a').state).toBe('stopped');
    expect(ledger.get('a').progress?.savedStep).toBe(12);
  });

  it('gives back a run that was claimed just before the cap was lowered', async () => {
    const ledger = new MemoryLedger({ cap: 2 });
    const { queue, add, states } = await queueOn(ledger);
    await add('a', 'work');
    await until(() => queue.workers().length === 1);
    beforeFork(ledger, 'b', () => queue.setCap(1, 'checkpoint'));
    await add('b', 'work');
    await until(() => states('b').includes('queued: cap lowered'));
    await queue.released('b');
    expect(queue.workers().map(({ runId }) => runId)).toEqual(['a']);
    expect(ledger.get('b').state).toBe('queued');
    await queue.setCap(2, 'drain');
    await until(() => queue.workers().length === 2);
  });

  it('takes nothing new while paused, and goes on afterwards', async () => {
    const ledger = new MemoryLedger({ cap: 2, paused: true });
    const { queue, add } = await queueOn(ledger);
    await add('a', 'work');
    await add('b', 'work');
    await new Promise((resolve) => setTimeout(resolve, 300));
    expect(queue.workers()).toEqual([]);
    await queue.setPaused(false);
    await until(() => queue.workers().length === 2);
    await queue.setPaused(true);
    expect(ledger.kept.paused).toBe(true);
    await add('c', 'finish');
    await queue.stop('a');
    await queue.released('a');
    await new Promise((resolve) => setTimeout(resolve, 300));
    expect(ledger.get('c').state).toBe('queued');
  });

  it('follows the order that an admin gave', async () => {
    const ledger = new MemoryLedger({ paused: true });
    const { queue, add, events } = await queueOn(ledger);
    for (const id of ['a', 'b', 'c']) await add(id, 'finish');
    await queue.reorder(['c', 'a']);
    await queue.setPaused(false);
    await until(() => [...ledger.runs.values()].every((run) => run.state === 'finished'));
    expect(events.flatMap((e) => (e.type === 'state' && e.state === 'running' ? [e.runId] : []))).toEqual([
      'c',
      'a',
      'b',
    ]);
  });

  it('stops at once, waiting or running, and resumes only after the last worker has gone', async () => {
    const ledger = new MemoryLedger();
    const { queue, add, states, events } = await queueOn(ledger);
    await add('a', 'work');
    await add('b', 'work');
    await until(() => ledger.get('a').progress !== null);
    expect(await queue.stop('b')).toBe(true);
    expect(await queue.stop('b')).toBe(false);
    const first = queue.workers()[0].pid;
    expect(await queue.stop('a')).toBe(true);
    expect(ledger.get('a').state).toBe('stopped');
    expect(await ledger.markQueued('a', 'resumed', 'back')).toBe(true);
    await queue.enqueue('a');
    await until(() => queue.workers().some(({ pid }) => pid !== first));
    expect(queue.workers()).toHaveLength(1);
    expect(events.some((event) => event.type === 'progress' && event.progress.savedStep === 12)).toBe(true);
    expect(states('a')).toEqual(['queued', 'running', 'stopped', 'queued: resumed', 'running']);
    expect(ledger.get('b').state).toBe('stopped');
  });

  it('fails a run whose workers keep dying, and says how', async () => {
    const ledger = new MemoryLedger();
    const { add, states } = await queueOn(ledger);
    await add('a', 'die');
    await until(() => ledger.get('a').state === 'failed');
    expect(states('a')).toEqual([
      'queued',
      'running',
      'queued: worker died',
      'running',
      'queued: worker died',
      'running',
      'failed',
    ]);
    expect(ledger.get('a').failure).toMatchObject({ cause: 'worker died', step: 1, lastGoodStep: null });
    expect(ledger.get('a').failure?.message).toMatch(/died 3 times.*killed by SIGKILL \(out of paper\)/);
  });

  it('does not give up while checkpoints keep landing', async () => {
    const ledger = new MemoryLedger();
    const { queue, add, states } = await queueOn(ledger);
    await add('a', 'saveAndDie');
    await until(() => states('a').filter((state) => state === 'queued: worker died').length >= 5);
    await queue.stop('a');
    expect(ledger.get('a').state).toBe('stopped');
  });

  it('keeps a run whose integration failed as failed', async () => {
    const ledger = new MemoryLedger();
    const { add } = await queueOn(ledger);
    await add('a', 'fail');
    await until(() => ledger.get('a').state === 'failed');
    expect(ledger.get('a').failure).toMatchObject({ cause: 'non-finite', step: 3 });
  });

  it('requeues on a full disk and waits before it tries again', async () => {
    const ledger = new MemoryLedger();
    const { add, states } = await queueOn(ledger, { diskRetrySeconds: 1 });
    await add('a', 'full');
    await until(() => ledger.get('a').queuedReason === 'disk full');
    await new Promise((resolve) => setTimeout(resolve, 400));
    expect(states('a')).toEqual(['queued', 'running', 'queued: disk full']);
    ledger.get('a').setup = scripted('finish');
    await until(() => ledger.get('a').state === 'finished');
  });

  it('takes up what a killed server left running, in its order, before what waited', async () => {
    const ledger = new MemoryLedger({ cap: 2, paused: true });
    for (const id of ['a', 'b', 'c']) ledger.add(id, scripted('finish'));
    await ledger.claimNext();
    await ledger.claimNext();
    const { queue, states } = await queueOn(ledger);
    expect(ledger.order).toEqual(['a', 'b', 'c']);
    expect(ledger.get('b').queuedReason).toBe('server stopped');
    await queue.setPaused(false);
    await until(() => [...ledger.runs.values()].every((run) => run.state === 'finished'));
    expect(states('a')).toEqual(['queued: server stopped', 'running', 'finished']);
  });

  it('gives running work back when it closes, and kills a worker that will not save', async () => {
    const ledger = new MemoryLedger({ cap: 2 });
    const { queue, add, events } = await queueOn(ledger, { closeSeconds: 1 });
    await add('a', 'work');
    await add('b', 'stubborn');
    await until(() => ledger.get('a').progress !== null && ledger.get('b').progress !== null);
    await queue.close();
    expect(['a', 'b'].map((id) => ledger.get(id).state)).toEqual(['queued', 'queued']);
    expect(ledger.get('b').queuedReason).toBe('server stopped');
    expect(ledger.get('a').progress?.savedStep).toBe(12);
    const told = events.length;
    await new Promise((resolve) => setTimeout(resolve, 200));
    expect(events).toHaveLength(told);
  });

  it('lists its workers', async () => {
    const ledger = new MemoryLedger();
    const { queue, add } = await queueOn(ledger);
    await add('a', 'work');
    await until(() => queue.workers()[0]?.residentBytes !== null && queue.workers().length === 1);
    const [info] = queue.workers();
    expect(info).toMatchObject({ runId: 'a', cpuSeconds: 1, cellStepsPerSecond: 1e6, deaths: 0 });
    expect(info.pid).toBe(ledger.get('a').workerPid);
    expect(info.lastHeardAt.getTime()).toBeGreaterThanOrEqual(info.startedAt.getTime());
  });
});
