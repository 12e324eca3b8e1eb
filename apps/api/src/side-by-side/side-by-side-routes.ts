import { sideBySideSchema } from '@halfdeep/contracts';
import { Router } from 'express';
import * as z from 'zod';
import { route } from '../http/route';
import { type RunService } from '../runs/run-service';
import { type SideBySideService } from './side-by-side-service';

const query = z.object({
  a: z.uuid('The first run is named by its id: ?a=…'),
  b: z.uuid('The second run is named by its id: ?b=…'),
});

/** /side-by-side?a=&b= */
export function sideBySideRoutes(services: { runs: RunService; sideBySide: SideBySideService }): Router {
  const router = Router();
  const { runs, sideBySide } = services;
  route(
    router,
    {
      method: 'get',
      path: '/side-by-side',
      action: 'run.compare',
      summary: 'What differs between two setups, and RMS difference and correlation of the results per variable',
      query,
      answer: sideBySideSchema,
    },
    async ({ query: { a, b }, actor, res }) => {
      const left = new AbortController();
      res.once('close', () => left.abort());
      return sideBySide.compare(await runs.find(a), await runs.find(b), actor, left.signal);
    },
  );
  return router;
}
