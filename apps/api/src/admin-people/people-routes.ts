import {
  auditEntrySchema,
  inviteSchema,
  outboxMailSchema,
  pageQuerySchema,
  pageSchema,
  personPatchSchema,
  personSchema,
} from '@halfdeep/contracts';
import { Router } from 'express';
import * as z from 'zod';
import { type AuditTrail } from '../audit/audit-trail';
import { route } from '../http/route';
import { type Outbox } from '../mail/outbox';
import { type PeopleService } from './people-service';

export interface PeopleRouteParts {
  people: PeopleService;
  audit: AuditTrail;
  outbox: Outbox;
}

export function peopleRoutes({ people, audit, outbox }: PeopleRouteParts): Router {
  const router = Router();
  route(
    router,
    {
      method: 'get',
      path: '/admin/people',
      action: 'people.list',
      summary: 'Everybody who may sign in or was invited.',
      query: pageQuerySchema,
      answer: pageSchema(personSchema),
    },
    ({ query }) => people.list(query),
  );
  route(
    router,
    {
      method: 'post',
      path: '/admin/people',
      action: 'people.invite',
      summary: 'Invite somebody by mail; again, when they have not accepted yet.',
      body: inviteSchema,
      answer: personSchema,
      status: 201,
    },
    ({ body, caller, actor }) => people.invite(body, { ...caller, actor }),
  );
  route(
    router,
    {
      method: 'patch',
      path: '/admin/people/:id',
      action: 'people.change',
      summary: 'Change roles, deactivate or reactivate. Ends the sessions of that person and tells them by mail.',
      params: z.object({ id: z.uuid('A person is named by an id.') }),
      body: personPatchSchema,
      answer: personSchema,
    },
    ({ params, body, caller, actor }) => people.change(params.id, body, { ...caller, actor }),
  );
  route(
    router,
    {
      method: 'get',
      path: '/admin/audit',
      action: 'audit.read',
      summary: 'What was done, by whom, newest first; q searches.',
      query: pageQuerySchema,
      answer: pageSchema(auditEntrySchema),
    },
    ({ query }) => audit.list(query),
  );
  route(
    router,
    {
      method: 'get',
      path: '/admin/outbox',
      action: 'outbox.read',
      summary: 'Mails and what became of them, newest first; links are withheld.',
      query: pageQuerySchema,
      answer: pageSchema(outboxMailSchema),
    },
    ({ query }) => outbox.list(query),
  );
  return router;
}
