import {
  BUNDLE_MEDIA,
  extendRunSchema,
  newRunSchema,
  pageQuerySchema,
  pageSchema,
  runSchema,
  runStateSchema,
  runSummarySchema,
  setupSchema,
} from '@halfdeep/contracts';
import { type Run } from '@halfdeep/store';
import { Router } from 'express';
import * as z from 'zod';
import { type ExperimentService } from '../experiments/experiment-service';
import { route } from '../http/route';
import { type Caller } from '../policy/actor';
import { type Action } from '../policy/policy-table';
import { type RunExports, STATE_MEDIA } from './run-exports';
import { presentRun, presentRuns, presentWholeRun } from './run-presenter';
import { type RunService } from './run-service';
import { type SetupCheck } from './setup-check';

export interface RunRouteServices {
  runs: RunService;
  experiments: ExperimentService;
  check: SetupCheck;
  exports: RunExports;
}

const runId = z.object({ id: z.uuid('A run is named by its id, a UUID.') });
const experimentId = z.object({ id: z.uuid('An experiment is named by its id, a UUID.') });
const listQuery = pageQuerySchema.extend({
  state: runStateSchema.optional(),
  experimentId: z.uuid().optional(),
  owner: z.enum(['me', 'anyone']).default('anyone'),
});

/** /preflight, /experiments/:id/runs and /runs: making, reading, stopping, going on, deleting. */
export function runRoutes(services: RunRouteServices): Router {
  const router = Router();
  const { runs, experiments, check, exports } = services;
  route(
    router,
    {
      method: 'post',
      path: '/preflight',
      action: 'preflight.run',
      summary: 'Derived numbers, checks and cost of a setup, with the speed and the disk of this machine',
      body: setupSchema,
      answer: z.looseObject({ verdict: z.enum(['pass', 'caution', 'refuse']) }).meta({ id: 'Preflight' }),
    },
    async ({ body }) => ({ ...(await check.check(body)) }),
  );
  route(
    router,
    {
      method: 'post',
      path: '/experiments/:id/runs',
      action: 'run.queue',
      summary: 'Queue a run of a setup in an experiment',
      params: experimentId,
      body: newRunSchema,
      subject: async ({ params }) => {
        const experiment = await experiments.find(params.id);
        return { ownerId: experiment.ownerId, noun: 'experiment', experiment };
      },
      answer: runSchema,
      status: 202,
    },
    async ({ subject, body, actor }) => presentWholeRun(await runs.create(subject.experiment, body), actor),
  );
  route(
    router,
    {
      method: 'get',
      path: '/runs',
      action: 'run.list',
      summary: 'A page of runs; sort by created, ended, label, state or disk, with a minus for descending',
      query: listQuery,
      answer: pageSchema(runSummarySchema),
    },
    async ({ query, actor }) => {
      const { page, pageSize, state, experimentId: inside, owner } = query;
      const ownerId = owner === 'me' ? actor.id : undefined;
      const { rows, count } = await runs.list(query, { state, experimentId: inside, ownerId });
      return { items: await presentRuns(rows, actor), page, pageSize, total: count };
    },
  );
  const subject = async ({ params }: { params: z.infer<typeof runId> }) => {
    const run = await runs.find(params.id);
    return { ownerId: run.ownerId, state: run.state, noun: 'run', run };
  };
  route(
    router,
    {
      method: 'get',
      path: '/runs/:id',
      action: 'run.read',
      summary: 'A run with its setup and what preflight said when it was queued',
      params: runId,
      subject,
      answer: runSchema,
    },
    ({ subject: { run }, actor }) => presentWholeRun(run, actor),
  );
  route(
    router,
    {
      method: 'get',
      path: '/runs/:id/setup',
      action: 'run.export',
      summary: 'The setup as a file; with its start state as a bundle (a zip) when it starts from one',
      params: runId,
      subject,
      media: ['application/json', BUNDLE_MEDIA],
    },
    ({ subject: { run }, res }) => exports.sendSetup(run, res),
  );
  route(
    router,
    {
      method: 'get',
      path: '/runs/:id/state',
      action: 'run.export',
      summary:
        'The last state of a finished run, to start another from; its SHA-256 is lastState.stateSha256 of the run',
      params: runId,
      subject,
      media: STATE_MEDIA,
    },
    ({ subject: { run }, res }) => exports.sendState(run, res),
  );
  /** A POST without a body that does something to a run and answers with its summary. */
  const order = (name: string, action: Action, summary: string, done: (run: Run, caller: Caller) => Promise<Run>) =>
    route(
      router,
      {
        method: 'post',
        path: `/runs/:id/${name}`,
        action,
        summary,
        params: runId,
        subject,
        answer: runSummarySchema,
        status: 202,
      },
      async ({ subject: { run }, actor, caller }) => presentRun(await done(run, caller), actor),
    );
  order('stop', 'run.stop', 'Stop a run at once; its state is saved behind the answer', (run, caller) =>
    runs.stop(run, caller),
  );
  order('resume', 'run.resume', 'Go on with a stopped or failed run', (run) => runs.resume(run));
  order('repeat', 'run.repeat', 'Queue the same setup once more: its fingerprint must be the same', (run) =>
    runs.repeat(run),
  );
  route(
    router,
    {
      method: 'post',
      path: '/runs/:id/extend',
      action: 'run.extend',
      summary: 'Queue a new run that starts from the last state of a finished one',
      params: runId,
      body: extendRunSchema,
      subject,
      answer: runSummarySchema,
      status: 202,
    },
    async ({ subject: { run }, body, actor }) => presentRun(await runs.extend(run, body), actor),
  );
  route(
    router,
    {
      method: 'delete',
      path: '/runs/:id',
      action: 'run.delete',
      summary: 'Delete a run and everything it left on disk',
      params: runId,
      subject,
    },
    ({ subject: { run }, caller }) => runs.delete(run, caller),
  );
  return router;
}
