import { type Request, type Response, type Router } from 'express';
import type * as z from 'zod';
import { authorise, authoriseRole, isOpen, needsSubject, policyRows } from '../policy/policy';
import { type Actor, type Caller, type PolicySubject } from '../policy/actor';
import { type Action } from '../policy/policy-table';
import { InputError, UnauthenticatedError } from './errors';
import { type AnswerOnce } from './answer-once';
import { parseInput } from './parse-input';

/** What app.ts puts into `app.locals.frame` for every route. */
export interface RouteFrame {
  answerOnce: AnswerOnce;
  /** Tests switch it on: an answer that does not fit its schema is then a 500 instead of a surprise for the client. */
  checkAnswers: boolean;
}

/** What a handler gets: everything parsed, everything allowed. */
export interface RouteRequest<P, Q, B, S> {
  params: P;
  query: Q;
  body: B;
  /** What `subject` of the definition found. */
  subject: S;
  /** The signed-in person; throws 401 in a route that is open to anyone and has nobody signed in. */
  readonly actor: Actor;
  caller: Caller;
  req: Request;
  res: Response;
}

export interface RouteDefinition<
  P extends z.ZodType,
  Q extends z.ZodType,
  B extends z.ZodType,
  A extends z.ZodType,
  S extends PolicySubject,
> {
  method: 'get' | 'post' | 'patch' | 'delete';
  /** Below /api, as express writes it: `/runs/:id/stop`. */
  path: string;
  /** Its rows in the policy table say who may. */
  action: Action;
  /** One line for the API's description. */
  summary: string;
  /** An object schema with every `:name` of the path. */
  params?: P;
  query?: Q;
  body?: B;
  /**
   * Reads what the action is about: whose, in which state. Required when the table asks; throws NotFoundError when there
   * is no such thing. The handler gets it as `subject`.
   */
  subject?: (input: { params: z.infer<P>; query: z.infer<Q>; body: z.infer<B>; caller: Caller }) => Promise<S>;
  /** Schema of a JSON answer, which the handler returns. */
  answer?: A;
  /** Media types of an answer that the handler writes to `res` itself: slices, CSV, files, event streams. */
  media?: string | readonly string[];
  /** Of the successful answer; default 200, and 204 without `answer` and `media`. */
  status?: number;
}

type AnyDefinition = RouteDefinition<z.ZodType, z.ZodType, z.ZodType, z.ZodType, PolicySubject>;
export type RouteRecord = Omit<AnyDefinition, 'subject' | 'status'> & { status: number };

const records = new WeakMap<Router, RouteRecord[]>();
/** The routes that `route` put on this router, in order. */
export const routesOf = (router: Router): readonly RouteRecord[] => records.get(router) ?? [];

/** Throws for a definition that could not be decided or described: the server then does not start. */
function check(definition: AnyDefinition): RouteRecord {
  const { method, path, action, subject, status, ...rest } = definition;
  const where = `${method.toUpperCase()} /api${path}`;
  policyRows(action);
  if (needsSubject(action) && !subject)
    throw new Error(`${where}: “${action}” depends on owner or state, so the route must say how to find its subject.`);
  if (/[:*]/.test(path) && !rest.params) throw new Error(`${where}: the path has parameters but no schema for them.`);
  if (rest.answer && rest.media) throw new Error(`${where}: an answer is JSON or ${String(rest.media)}, not both.`);
  return { method, path, action, ...rest, status: status ?? (rest.answer || rest.media ? 200 : 204) };
}

/**
 * Puts a route on a router: role, then parsing, then owner and state, then (POST with an Idempotency-Key) whether it was
 * answered before, then the handler. The same definition describes it in OpenAPI. Throws at start-up when the policy
 * table has no row for its action.
 */
export function route<
  P extends z.ZodType,
  Q extends z.ZodType,
  B extends z.ZodType,
  A extends z.ZodType,
  S extends PolicySubject,
>(
  router: Router,
  definition: RouteDefinition<P, Q, B, A, S>,
  handler: (request: RouteRequest<z.infer<P>, z.infer<Q>, z.infer<B>, S>) => Promise<z.input<A> | void>,
): void {
  const record = check(definition);
  records.set(router, [...routesOf(router), record]);

  router[definition.method](definition.path, async (req: Request, res: Response) => {
    const caller = callerOf(res);
    const frame = req.app.locals['frame'] as RouteFrame;
    authoriseRole(caller.actor, definition.action);
    const params = parsePart(definition.params, req.params, 'path');
    const query = parsePart(definition.query, req.query, 'query');
    const body = parsePart(definition.body, req.body, 'body');
    const subject = (await definition.subject?.({ params, query, body, caller })) as S;
    if (definition.subject) authorise(caller.actor, definition.action, subject);

    const request = {
      params,
      query,
      body,
      subject,
      caller,
      req,
      res,
      get actor(): Actor {
        if (!caller.actor) throw new UnauthenticatedError();
        return caller.actor;
      },
    };
    if (record.media) {
      await handler(request);
      return;
    }
    const work = async () => {
      const answer: unknown = await handler(request);
      if (frame.checkAnswers && record.answer) record.answer.parse(JSON.parse(JSON.stringify(answer)));
      return { status: record.status, answer };
    };
    // What is open to anyone carries passwords and answers with tokens: of such requests nothing is kept.
    const kept = record.method === 'post' && !isOpen(record.action);
    const key = kept ? req.get('idempotency-key') : undefined;
    const done =
      key !== undefined && caller.actor
        ? await frame.answerOnce.run(
            caller.actor.id,
            checkedKey(key),
            `${req.method} ${req.originalUrl}`,
            req.body,
            work,
          )
        : await work();
    if (done.answer === undefined) res.status(done.status).end();
    else res.status(done.status).json(done.answer);
  });
}

function parsePart<S extends z.ZodType>(schema: S | undefined, input: unknown, part: 'body' | 'query' | 'path') {
  return (schema ? parseInput(schema, input, part) : undefined) as z.infer<S>;
}

function checkedKey(key: string): string {
  if (/^[\x21-\x7e]{1,100}$/.test(key)) return key;
  throw new InputError('An Idempotency-Key is 1 to 100 printable characters without spaces, a UUID for instance.');
}

/** Who asks, as the authentication middleware found out. */
export function callerOf(res: Response): Caller {
  const caller = res.locals['caller'] as Caller | undefined;
  if (!caller) throw new Error('A route was mounted before the authentication middleware.');
  return caller;
}
