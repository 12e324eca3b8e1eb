// Role × route × ownership × state, generated from the policy table over every route that is mounted.
import { randomUUID } from 'node:crypto';
import { RUN_STATES, type Role, type RunState } from '@halfdeep/contracts';
import { corvaneSetup, preflight } from '@halfdeep/ocean';
import { Experiment, Run } from '@halfdeep/store';
import { Router } from 'express';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type RouteRecord, route } from '../../apps/api/src/http/route';
import { ACTIONS, POLICY_TABLE, type Action, type PolicyRow } from '../../apps/api/src/policy/policy-table';
import { policyRows } from '../../apps/api/src/policy/policy';
import { script, somebody, startDeskApi, type DeskApi, type Script, type Somebody } from './desk-harness';

let api: DeskApi;
let routes: readonly RouteRecord[];
const WHO = ['nobody', 'owner', 'modeller', 'reviewer', 'admin'] as const;
type Who = (typeof WHO)[number];
const ROLE: Record<Who, Role | null> = {
  nobody: null,
  owner: 'modeller',
  modeller: 'modeller',
  reviewer: 'reviewer',
  admin: 'admin',
};
const people = {} as Record<Exclude<Who, 'nobody'>, Somebody>;
const scripts = {} as Record<Exclude<Who, 'nobody'>, Script>;

beforeAll(async () => {
  api = await startDeskApi();
  // Runs are queued and stopped in earnest, and none is computed.
  await api.services.runs.start();
  await api.services.runs.queue.setPaused(true);
  routes = api.app.locals['routes'] as RouteRecord[];
  for (const who of ['owner', 'modeller', 'reviewer', 'admin'] as const)
    people[who] = await somebody(api, who, ROLE[who]!);
  for (const who of ['owner', 'modeller', 'reviewer', 'admin'] as const) scripts[who] = await script(api, people[who]);
});
afterAll(() => api.close());

const setup = corvaneSetup();
/** What each route with a body is sent: right in form, so that the decision is the policy's. */
const BODIES: Record<string, object> = {
  'post /session': { email: 'nobody@desk.example', password: 'wrong' },
  'post /session/refresh': {},
  'post /password-resets': { email: 'nobody@desk.example' },
  'post /password-resets/redeem': { token: 'x'.repeat(43), password: 'slack water 41 fathoms' },
  'post /invitations/look': { token: 'x'.repeat(43) },
  'post /invitations/redeem': { token: 'x'.repeat(43), name: 'X', password: 'slack water 41 fathoms' },
  'post /experiments': { question: 'Who may ask this question?' },
  'patch /experiments/:id': { notes: 'Noted.' },
  'post /preflight': setup,
  'post /experiments/:id/runs': { label: 'Control', setup },
  'post /runs/:id/extend': { label: 'Longer', days: 30 },
  'post /runs/:id/convergence': { coast: 'same' },
  'patch /admin/queue': { paused: true },
  'post /admin/people': { email: 'guest@desk.example', name: 'Guest', roles: ['reviewer'] },
  'patch /admin/people/:id': {},
};
const QUERIES: Record<string, string> = {
  'get /runs/:id/frames/:record': '?variable=eta',
  'get /runs/:id/hovmoller': '?variable=eta&latitude=0',
};

/** A fresh experiment of the owner, with a run in this state. */
async function thing(state: RunState): Promise<{ experimentId: string; runId: string }> {
  const [experimentId, runId] = [randomUUID(), randomUUID()];
  const ownerId = people.owner.id;
  const now = new Date();
  const progress = {
    step: 0,
    totalSteps: 100,
    startStep: 0,
    day: 0,
    totalDays: 1,
    cellStepsPerSecond: null,
    secondsLeft: null,
    records: { frames: 0, sections: 0, moorings: 0, budget: 0 },
    savedStep: null,
    cautions: [],
  };
  const shape: [number, number, number, number, number, number] = [1, 1, 1, 1, 1, 1];
  const finished = { fingerprint: { sha256: '0'.repeat(64), coreVersion: '1', shape }, lastStep: 100 };
  const failure = { cause: 'worker died', message: 'It died.', step: 0, day: 0, place: null, lastGoodStep: 0 } as const;
  await api.services.desk.write(async (transaction) => {
    const question = 'Whose is this?';
    await Experiment.create(
      { id: experimentId, ownerId, question, notes: '', createdAt: now, movedAt: now, moved: 'Question asked' },
      { transaction },
    );
    await Run.create(
      {
        id: runId,
        experimentId,
        ownerId,
        label: 'Control',
        setup,
        preflight: checked,
        nx: 1,
        ny: 1,
        parentRunId: null,
        parentLabel: null,
        descent: 'control',
        changes: [],
        state,
        queuedReason: null,
        queueOrder: state === 'queued' ? 1 : null,
        failure: state === 'failed' ? failure : null,
        deaths: 0,
        createdAt: now,
        queuedAt: now,
        startedAt: null,
        endedAt: null,
        progress,
        fingerprint: state === 'finished' ? finished.fingerprint : null,
        stateSha256: state === 'finished' ? '0'.repeat(64) : null,
        lastStep: state === 'finished' ? finished.lastStep : null,
        diskBytes: null,
        workerPid: null,
      },
      { transaction },
    );
  });
  return { experimentId, runId };
}
const checked = preflight(setup);

const keyOf = ({ method, path }: RouteRecord) => `${method} ${path}`;
const isAboutRuns = ({ path }: RouteRecord) => path.startsWith('/runs/:id');

/** The table read a second time, plainly: what should happen? */
function expected(rows: readonly PolicyRow[], who: Who, state: RunState): 'sign in' | 'no' | 'not now' | 'yes' {
  const role = ROLE[who];
  const admitted = rows.filter((row) => row[1] === 'anyone' || (role && (row[1] === 'signed in' || row[1] === role)));
  if (admitted.length === 0) return role ? 'no' : 'sign in';
  const owned = admitted.filter((row) => row[2] === 'any' || who === 'owner');
  if (owned.length === 0) return 'no';
  return owned.some((row) => row[3] === 'any' || row[3].includes(state)) ? 'yes' : 'not now';
}

async function ask(record: RouteRecord, who: Who, state: RunState) {
  const { experimentId, runId } = await thing(state);
  const id = record.path.startsWith('/admin/people') ? people.reviewer.id : isAboutRuns(record) ? runId : experimentId;
  const path = record.path.replace(':id', id).replace(':record', '0').replace(':stream', 'sections');
  const query = record.path === '/side-by-side' ? `?a=${runId}&b=${runId}` : (QUERIES[keyOf(record)] ?? '');
  const body = BODIES[keyOf(record)];
  const stop = new AbortController();
  const answer = await fetch(`${api.url}/api${path}${query}`, {
    method: record.method.toUpperCase(),
    headers: {
      ...(who !== 'nobody' && { authorization: `Bearer ${scripts[who].token}` }),
      ...(body && { 'content-type': 'application/json' }),
    },
    body: body && JSON.stringify(body),
    signal: stop.signal,
  });
  const detail = answer.headers.get('content-type')?.startsWith('application/problem')
    ? ((await answer.json()) as { detail: string }).detail
    : '';
  stop.abort(); // an event stream would not end by itself
  // Signing out ends the session that the other cases use.
  if (record.action === 'session.close' && who !== 'nobody') scripts[who] = await script(api, people[who]);
  return { status: answer.status, detail };
}

describe('the policy table', () => {
  it('has a row for every action, and an action for every row', () => {
    for (const action of Object.keys(ACTIONS) as Action[]) expect(policyRows(action)).not.toEqual([]);
    for (const [action] of POLICY_TABLE) expect(ACTIONS).toHaveProperty([action]);
  });

  it('does not let a route start whose action has no row', () => {
    const unknown = { method: 'get', path: '/new', action: 'new.thing' as Action, summary: 'New.' } as const;
    expect(() => route(Router(), unknown, () => Promise.resolve())).toThrow(/no row for “new.thing”/);
  });

  it('does not let a route start that cannot tell whose the thing is, or its state', () => {
    const blind = { method: 'post', path: '/runs/stop', action: 'run.stop', summary: 'Stop.' } as const;
    expect(() => route(Router(), blind, () => Promise.resolve())).toThrow(/must say how to find its subject/);
  });

  it('is obeyed by every route, for everybody, in every state of a run', async () => {
    const wrong: string[] = [];
    const seen = { 'sign in': 0, no: 0, 'not now': 0, yes: 0 };
    for (const record of routes) {
      if (record.body) expect(BODIES, `an example body for ${keyOf(record)}`).toHaveProperty([keyOf(record)]);
      const rows = policyRows(record.action);
      const states = rows.some((row) => row[3] !== 'any') ? RUN_STATES : (['stopped'] as const);
      for (const who of WHO)
        for (const state of states) {
          const should = expected(rows, who, state);
          const { status, detail } = await ask(record, who, state);
          const policySays = detail.startsWith('You may not');
          const did =
            status === 401 && detail.startsWith('Nobody is signed in')
              ? 'sign in'
              : status === 403
                ? 'no'
                : status === 409 && policySays
                  ? 'not now'
                  : 'yes';
          seen[should] += 1;
          // The refresh token is not the access token: without a cookie nobody can renew, whoever asks.
          const fits = record.action === 'session.refresh' ? status === 401 : did === should && status < 500;
          if (!fits) wrong.push(`${who}: ${keyOf(record)} (${state}) should be “${should}”; ${status} ${detail}`);
        }
    }
    expect(wrong).toEqual([]);
    for (const count of Object.values(seen)) expect(count).toBeGreaterThan(10); // each kind of answer was asked for
  }, 300_000);
});

// From the list of who uses the product; written by hand, so that a slip in the table is noticed.
describe('what each role must never be able to do', () => {
  const NEVER: Record<Exclude<Who, 'nobody' | 'owner'>, string[]> = {
    modeller: [
      'patch /experiments/:id',
      'post /experiments/:id/runs',
      'post /runs/:id/stop',
      'post /runs/:id/resume',
      'post /runs/:id/extend',
      'post /runs/:id/repeat',
      'post /runs/:id/convergence',
      'delete /runs/:id',
      'get /admin/queue',
      'patch /admin/queue',
      'get /admin/workers',
      'get /admin/people',
      'post /admin/people',
      'patch /admin/people/:id',
      'get /admin/audit',
      'get /admin/outbox',
    ],
    reviewer: [
      'post /experiments',
      'patch /experiments/:id',
      'post /experiments/:id/runs',
      'post /runs/:id/stop',
      'post /runs/:id/resume',
      'post /runs/:id/extend',
      'post /runs/:id/repeat',
      'post /runs/:id/convergence',
      'delete /runs/:id',
      'patch /admin/queue',
      'get /admin/people',
      'post /admin/people',
      'patch /admin/people/:id',
      'get /admin/audit',
      'get /admin/outbox',
    ],
    admin: [
      'post /experiments',
      'patch /experiments/:id',
      'post /experiments/:id/runs',
      'post /runs/:id/resume',
      'post /runs/:id/extend',
      'post /runs/:id/repeat',
      'post /runs/:id/convergence',
      'delete /runs/:id',
    ],
  };
  it.each(['modeller', 'reviewer', 'admin'] as const)('%s, on what is another’s', async (who) => {
    for (const key of NEVER[who]) {
      const record = routes.find((one) => keyOf(one) === key);
      expect(record, key).toBeDefined();
      const { status } = await ask(record!, who, 'stopped');
      expect({ key, status }).toEqual({ key, status: 403 });
    }
  });

  it('nobody who is not signed in gets anything but the way in', async () => {
    const open = routes.filter((record) => policyRows(record.action).some((row) => row[1] === 'anyone')).map(keyOf);
    expect(open.sort()).toEqual(
      [
        'delete /session',
        'get /health',
        'get /openapi.json',
        'post /invitations/look',
        'post /invitations/redeem',
        'post /password-resets',
        'post /password-resets/redeem',
        'post /session',
        'post /session/refresh',
      ].sort(),
    );
    for (const record of routes.filter((one) => !open.includes(keyOf(one))))
      expect({ key: keyOf(record), status: (await ask(record, 'nobody', 'stopped')).status }).toEqual({
        key: keyOf(record),
        status: 401,
      });
  });
});
