import { type Experiment, type Problem, type Run } from '@halfdeep/contracts';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
  endlessSetup,
  newExperiment,
  newRun,
  reach,
  smallSetup,
  startRunApi,
  type Hand,
  type RunApi,
} from './run-harness';

type Who = 'owner' | 'modeller' | 'reviewer' | 'admin' | 'nobody';

describe('who may do what with an experiment and its runs', () => {
  let api: RunApi;
  const hands = {} as Record<Exclude<Who, 'nobody'>, Hand>;
  let experiment: Experiment;
  let finished: Run;
  let running: Run;

  beforeAll(async () => {
    api = await startRunApi();
    hands.owner = await api.person('owner', 'modeller');
    hands.modeller = await api.person('other', 'modeller');
    hands.reviewer = await api.person('reviewer', 'reviewer');
    hands.admin = await api.person('admin', 'admin');
    experiment = await newExperiment(hands.owner);
    finished = await reach(hands.owner, (await newRun(hands.owner, experiment.id, smallSetup(3))).id, 'finished');
    running = await newRun(hands.owner, experiment.id, endlessSetup(), 'Endless');
    await reach(hands.owner, running.id, 'running');
  });
  afterAll(() => api.close());

  const status = async (who: Who, method: string, path: string, body?: object) => {
    const answer = await fetch(`${api.url}${path}`, {
      method,
      headers: {
        ...(who === 'nobody' ? {} : { authorization: `Bearer ${hands[who].token}` }),
        ...(body ? { 'content-type': 'application/json' } : {}),
      },
      body: body && JSON.stringify(body),
    });
    await answer.body?.cancel();
    return answer.status;
  };

  const reads = [
    '/api/experiments',
    '/api/experiments/:experiment',
    '/api/runs',
    '/api/runs/:finished',
    '/api/runs/:finished/frames/0?variable=eta',
    '/api/runs/:finished/hovmoller?variable=eta&latitude=0',
    '/api/runs/:finished/series/budget',
    '/api/side-by-side?a=:finished&b=:finished',
    '/api/presets',
    '/api/desk',
    '/api/runs/:finished/setup',
    '/api/runs/:finished/state',
    '/api/events?runs=:finished',
  ];
  const filled = (path: string) =>
    path
      .replaceAll(':experiment', experiment.id)
      .replaceAll(':finished', finished.id)
      .replaceAll(':running', running.id);

  it.each(reads)('everybody of the group reads %s, and nobody else', async (path) => {
    for (const who of ['owner', 'modeller', 'reviewer', 'admin'] as const)
      expect([who, await status(who, 'GET', filled(path))]).toEqual([who, 200]);
    expect(await status('nobody', 'GET', filled(path))).toBe(401);
  });

  // What the owner may do is done last, in the other files and below; here everybody else is turned away.
  const ownersOnly: [string, string, object?][] = [
    ['PATCH', '/api/experiments/:experiment', { notes: 'changed' }],
    ['POST', '/api/experiments/:experiment/runs', { label: 'x', setup: smallSetup(3) }],
    ['POST', '/api/runs/:running/resume'],
    ['POST', '/api/runs/:finished/extend', { label: 'x', days: 3 }],
    ['POST', '/api/runs/:finished/repeat'],
    ['DELETE', '/api/runs/:finished'],
  ];
  it.each(ownersOnly)('only the owner may %s %s', async (method, path, body) => {
    for (const who of ['modeller', 'reviewer', 'admin'] as const)
      expect([who, await status(who, method, filled(path), body)]).toEqual([who, 403]);
    expect(await status('nobody', method, filled(path), body)).toBe(401);
  });

  it('only modellers begin experiments', async () => {
    const body = { question: 'May I ask this?' };
    expect(await status('modeller', 'POST', '/api/experiments', body)).toBe(201);
    expect(await status('reviewer', 'POST', '/api/experiments', body)).toBe(403);
    expect(await status('admin', 'POST', '/api/experiments', body)).toBe(403);
    expect(await status('nobody', 'POST', '/api/experiments', body)).toBe(401);
  });

  it.each([
    ['GET', '/api/admin/queue'],
    ['PATCH', '/api/admin/queue'],
    ['GET', '/api/admin/workers'],
  ])('only an admin may %s %s', async (method, path) => {
    const body = method === 'PATCH' ? { paused: false } : undefined;
    expect(await status('admin', method, path, body)).toBe(200);
    for (const who of ['owner', 'reviewer'] as const) expect(await status(who, method, path, body)).toBe(403);
    expect(await status('nobody', method, path, body)).toBe(401);
  });

  it('says why in words', async () => {
    const answer = await hands.modeller.patch(`/api/experiments/${experiment.id}`, { notes: '' }).expect(403);
    expect((answer.body as Problem).detail).toMatch(/only the owner of the experiment may/);
    const other = await hands.reviewer.post('/api/experiments', { question: 'May I ask this?' }).expect(403);
    expect((other.body as Problem).detail).toMatch(/takes the role modeller; yours: reviewer/);
  });

  it('offers what it allows: `can` says the same as the routes', async () => {
    const seen = async (hand: Hand, run: Run) => ((await hand.get(`/api/runs/${run.id}`)).body as Run).can;
    const nothing = { stop: false, resume: false, extend: false, repeat: false, derive: false, delete: false };
    expect(await seen(hands.owner, finished)).toEqual({
      ...nothing,
      extend: true,
      repeat: true,
      derive: true,
      delete: true,
    });
    expect(await seen(hands.owner, running)).toEqual({ ...nothing, stop: true, derive: true });
    for (const who of ['modeller', 'reviewer'] as const) {
      expect(await seen(hands[who], finished)).toEqual(nothing);
      expect(await seen(hands[who], running)).toEqual(nothing);
    }
    expect(await seen(hands.admin, running)).toEqual({ ...nothing, stop: true });
    const whole = async (hand: Hand) => ((await hand.get(`/api/experiments/${experiment.id}`)).body as Experiment).can;
    expect(await whole(hands.owner)).toEqual({ edit: true, queueRuns: true });
    expect(await whole(hands.admin)).toEqual({ edit: false, queueRuns: false });
  });

  it('lets an admin, and no co-modeller or reviewer, stop another’s run; that is audited', async () => {
    for (const who of ['modeller', 'reviewer'] as const)
      expect(await status(who, 'POST', `/api/runs/${running.id}/stop`)).toBe(403);
    expect(await status('admin', 'POST', `/api/runs/${running.id}/stop`)).toBe(202);
    expect(await status('admin', 'POST', `/api/runs/${running.id}/resume`)).toBe(403);
    const trail = (await hands.admin.get('/api/admin/audit?q=stopped a run')).body as { items: { subject: string }[] };
    expect(trail.items.map((entry) => entry.subject)).toEqual(['Endless']);
  });

  it('answers 404 for what is not there, 400 for what is no id', async () => {
    const nobody = '00000000-0000-4000-8000-000000000000';
    expect(await status('owner', 'GET', `/api/runs/${nobody}`)).toBe(404);
    expect(await status('owner', 'GET', `/api/experiments/${nobody}`)).toBe(404);
    expect(await status('owner', 'GET', '/api/runs/tides')).toBe(400);
    expect(await status('owner', 'POST', `/api/experiments/${nobody}/runs`, { label: 'x', setup: smallSetup(3) })).toBe(
      404,
    );
  });
});
