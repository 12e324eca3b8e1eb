import { healthSchema } from '@halfdeep/contracts';
import { type DeskDatabase } from '@halfdeep/store';
import { Router } from 'express';
import { route } from '../http/route';
import { VERSION } from './version';

export interface HealthParts {
  desk: DeskDatabase;
  /** Version of the numerical core: two runs of one setup agree to the last bit under the same one. */
  coreVersion: string;
  startedAt: Date;
}

export function healthRoutes({ desk, coreVersion, startedAt }: HealthParts): Router {
  const router = Router();
  route(
    router,
    {
      method: 'get',
      path: '/health',
      action: 'health.read',
      summary: 'Whether the server answers and its database does, and what it is.',
      answer: healthSchema,
    },
    async ({ res }) => {
      res.set('Cache-Control', 'no-store');
      await desk.sequelize.query('SELECT 1');
      const uptimeSeconds = Math.round((Date.now() - startedAt.getTime()) / 1000);
      return { ok: true, version: VERSION, coreVersion, schema: desk.schema, uptimeSeconds };
    },
  );
  return router;
}
