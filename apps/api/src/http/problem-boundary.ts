import { STATUS_CODES } from 'node:http';
import { type Problem } from '@halfdeep/contracts';
import { type ErrorRequestHandler, type Request, type Response } from 'express';
import { type Logger } from 'pino';
import { InputError, NotFoundError, RefusedError, TooManyError } from './errors';

/** Sends problem details (RFC 9457). */
export function sendProblem(res: Response, problem: Problem): void {
  res.status(problem.status).type('application/problem+json').send(JSON.stringify(problem));
}

/** Errors that express and its parsers throw carry a status and `expose`: their cause is in the request. */
function refusalOf(error: unknown): RefusedError | null {
  if (error instanceof RefusedError) return error;
  // Thrown by express itself for an address like “/%”, and without `expose`.
  if (error instanceof URIError)
    return new InputError('The address is not one: a % in it is not followed by two digits.');
  const known = error as { status?: unknown; type?: unknown; expose?: unknown; limit?: number } | null;
  if (known?.expose !== true || typeof known.status !== 'number' || known.status >= 500) return null;
  if (known.type === 'entity.parse.failed') return new InputError('The body is not valid JSON.');
  if (known.type === 'entity.too.large')
    return new InputError(`The body is larger than ${known.limit ?? 'the allowed number of'} bytes.`, undefined, 413);
  return new RefusedError(known.status, STATUS_CODES[known.status] ?? 'Refused', 'The request could not be read.');
}

/** Answers what no route under /api answered. */
export function nothingHere(req: Request): never {
  throw new NotFoundError(`There is nothing at ${req.method} ${req.baseUrl}${req.path}.`);
}

/** The one place where errors become answers. Mounted last. */
export function problemBoundary(logger: Logger): ErrorRequestHandler {
  return (error: unknown, req, res, next) => {
    // Half an answer is out: express closes the connection.
    if (res.headersSent) {
      logger.error({ err: error, method: req.method, path: req.path }, 'failed while answering');
      next(error);
      return;
    }
    const refusal = refusalOf(error);
    const type = 'about:blank';
    if (!refusal) {
      logger.error({ err: error, method: req.method, path: req.path }, 'failed');
      const detail = 'Something went wrong on the server; what it was stands in its log. Try again.';
      sendProblem(res, { type, title: 'Server error', status: 500, detail });
      return;
    }
    if (refusal instanceof TooManyError) res.set('Retry-After', String(Math.ceil(refusal.retryAfterS)));
    const { title, status, message: detail, errors } = refusal;
    sendProblem(res, { type, title, status, detail, ...(errors && { errors }) });
  };
}
