import {
  experimentPatchSchema,
  experimentSchema,
  experimentSummarySchema,
  newExperimentSchema,
  pageQuerySchema,
  pageSchema,
} from '@halfdeep/contracts';
import { Router } from 'express';
import * as z from 'zod';
import { route } from '../http/route';
import { type ExperimentService } from './experiment-service';

const idSchema = z.object({ id: z.uuid('An experiment is named by its id, a UUID.') });
const listQuery = pageQuerySchema.extend({ owner: z.enum(['me', 'anyone']).default('anyone') });

/** /experiments: the list, one, asking a new question, changing question and notes. */
export function experimentRoutes({ experiments }: { experiments: ExperimentService }): Router {
  const router = Router();
  route(
    router,
    {
      method: 'get',
      path: '/experiments',
      action: 'experiment.list',
      summary: 'A page of experiments; sort by moved, created, question or owner, with a minus for descending',
      query: listQuery,
      answer: pageSchema(experimentSummarySchema),
    },
    async ({ query, actor }) => {
      const { rows, count } = await experiments.list(query, query.owner === 'me' ? actor.id : null);
      const { page, pageSize } = query;
      return { items: await experiments.present(rows, actor), page, pageSize, total: count };
    },
  );
  route(
    router,
    {
      method: 'post',
      path: '/experiments',
      action: 'experiment.create',
      summary: 'Ask a question',
      body: newExperimentSchema,
      answer: experimentSchema,
      status: 201,
    },
    async ({ body, actor }) => experiments.presentWhole(await experiments.create(actor, body), actor),
  );
  const subject = async ({ params }: { params: z.infer<typeof idSchema> }) => {
    const experiment = await experiments.find(params.id);
    return { ownerId: experiment.ownerId, noun: 'experiment', experiment };
  };
  route(
    router,
    {
      method: 'get',
      path: '/experiments/:id',
      action: 'experiment.read',
      summary: 'An experiment with its notes and all its runs',
      params: idSchema,
      subject,
      answer: experimentSchema,
    },
    ({ subject: { experiment }, actor }) => experiments.presentWhole(experiment, actor),
  );
  route(
    router,
    {
      method: 'patch',
      path: '/experiments/:id',
      action: 'experiment.edit',
      summary: 'Change question or notes',
      params: idSchema,
      body: experimentPatchSchema,
      subject,
      answer: experimentSchema,
    },
    async ({ subject: { experiment }, body, actor }) =>
      experiments.presentWhole(await experiments.change(experiment, body), actor),
  );
  return router;
}
