import { type Request, type RequestHandler } from 'express';
import { ForbiddenError, InputError } from './errors';

const READS = new Set(['GET', 'HEAD', 'OPTIONS']);

/** The origin that a browser shows for this server. */
const ownOrigin = (req: Request) => `${req.protocol}://${req.get('host') ?? ''}`;

/**
 * Requests that change something come from our own pages, or from a script, which is no browser and sends neither of the
 * two headers. Stands beside SameSite=Strict, which older browsers and sibling sites get around.
 */
export function sameOriginOnly(publicUrl: string | null): RequestHandler {
  return (req, _res, next) => {
    if (READS.has(req.method)) {
      next();
      return;
    }
    const site = req.get('sec-fetch-site');
    const origin = req.get('origin');
    const ours = origin === undefined || origin === ownOrigin(req) || origin === publicUrl;
    if (!ours || (site !== undefined && site !== 'same-origin' && site !== 'none'))
      throw new ForbiddenError('This request came from another site. Use the pages of this server, or a script.');
    next();
  };
}

/** Bodies are JSON: what a form on another site can send without asking is refused. */
export const jsonOnly: RequestHandler = (req, _res, next) => {
  const hasBody = req.get('transfer-encoding') !== undefined || Number(req.get('content-length') ?? 0) > 0;
  const type = req.get('content-type');
  if (!READS.has(req.method) && (hasBody || type !== undefined) && !req.is('application/json'))
    throw new InputError(`Send JSON (Content-Type: application/json); ${type ?? 'no type'} arrived.`, undefined, 415);
  next();
};
