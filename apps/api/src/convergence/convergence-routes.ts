import { convergenceOrderSchema, convergenceSchema } from '@halfdeep/contracts';
import { Router } from 'express';
import * as z from 'zod';
import { route } from '../http/route';
import { type RunService } from '../runs/run-service';
import { type ConvergenceService } from './convergence-service';

const runId = z.object({ id: z.uuid('A run is named by its id, a UUID.') });

/** /runs/:id/convergence: the same setup at half and at twice the resolution. */
export function convergenceRoutes(services: { runs: RunService; convergence: ConvergenceService }): Router {
  const router = Router();
  const { runs, convergence } = services;
  const subject = async ({ params }: { params: z.infer<typeof runId> }) => {
    const run = await runs.find(params.id);
    return { ownerId: run.ownerId, state: run.state, noun: 'run', run };
  };
  route(
    router,
    {
      method: 'get',
      path: '/runs/:id/convergence',
      action: 'run.read',
      summary:
        'The runs at half and at twice the resolution, what they would cost, and the grid convergence index of the transports',
      params: runId,
      subject,
      answer: convergenceSchema,
    },
    ({ subject: { run }, actor }) => convergence.read(run, actor),
  );
  route(
    router,
    {
      method: 'post',
      path: '/runs/:id/convergence',
      action: 'run.refine',
      summary: 'Queue the same setup at half and at twice the resolution; what is there already stays',
      params: runId,
      body: convergenceOrderSchema,
      subject,
      answer: convergenceSchema,
      status: 202,
    },
    async ({ subject: { run }, body, actor }) => {
      await convergence.queue(run, body.coast);
      return convergence.read(run, actor);
    },
  );
  return router;
}
