import { deskSchema } from '@halfdeep/contracts';
import { Router } from 'express';
import { route } from '../http/route';
import { type DeskService } from './desk-service';

/** /desk: what moved since this person's last visit. */
export function deskRoutes({ deskService }: { deskService: DeskService }): Router {
  const router = Router();
  route(
    router,
    {
      method: 'get',
      path: '/desk',
      action: 'desk.read',
      summary: 'What computes, what waits, and what ended since your last visit',
      answer: deskSchema,
    },
    ({ actor }) => deskService.look(actor),
  );
  return router;
}
