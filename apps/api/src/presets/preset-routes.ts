import { presetSchema } from '@halfdeep/contracts';
import { PRESETS } from '@halfdeep/ocean';
import { Router } from 'express';
import * as z from 'zod';
import { route } from '../http/route';

/** /presets: ready setups to start a form from. */
export function presetRoutes(): Router {
  const router = Router();
  route(
    router,
    {
      method: 'get',
      path: '/presets',
      action: 'preset.list',
      summary: 'Ready setups, the Corvane control among them',
      answer: z.array(presetSchema),
    },
    () => Promise.resolve(PRESETS.map(({ id, name, about, setup }) => ({ id, name, about, setup }))),
  );
  return router;
}
