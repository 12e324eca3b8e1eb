import { adminQueuePatchSchema, adminQueueSchema, workerInfoSchema } from '@halfdeep/contracts';
import { Router } from 'express';
import * as z from 'zod';
import { route } from '../http/route';
import { type AdminQueueService } from './admin-queue-service';

/** /admin/queue and /admin/workers. */
export function adminQueueRoutes({ adminQueue }: { adminQueue: AdminQueueService }): Router {
  const router = Router();
  route(
    router,
    {
      method: 'get',
      path: '/admin/queue',
      action: 'queue.read',
      summary: 'The cap on runs at once, what computes and what waits, in order',
      answer: adminQueueSchema,
    },
    ({ actor }) => adminQueue.read(actor),
  );
  route(
    router,
    {
      method: 'patch',
      path: '/admin/queue',
      action: 'queue.change',
      summary: 'Change the cap, pause intake, reorder what waits; takes effect at once',
      body: adminQueuePatchSchema,
      answer: adminQueueSchema,
    },
    async ({ body, actor, caller }) => {
      await adminQueue.change(body, caller);
      return adminQueue.read(actor);
    },
  );
  route(
    router,
    {
      method: 'get',
      path: '/admin/workers',
      action: 'workers.read',
      summary: 'The worker processes and what each computes',
      answer: z.array(workerInfoSchema),
    },
    () => adminQueue.workers(),
  );
  return router;
}
