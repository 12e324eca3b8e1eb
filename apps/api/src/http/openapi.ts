import { OpenApiGeneratorV31, OpenAPIRegistry, type RouteConfig } from '@asteasolutions/zod-to-openapi';
import { problemSchema } from '@halfdeep/contracts';
import type * as z from 'zod';
import { isOpen, policyRows } from '../policy/policy';
import { type RouteRecord } from './route';

type ApiDocument = ReturnType<OpenApiGeneratorV31['generateDocument']>;

const REFUSALS: Record<number, string> = {
  400: 'The request cannot be read.',
  401: 'Nobody is signed in, or the session has ended.',
  403: 'Not allowed for this person.',
  404: 'No such thing.',
  409: 'Not possible in the state it is in.',
  422: 'The body was read but is not acceptable; `errors` names each place.',
  429: 'Too many attempts; `Retry-After` says how long to wait, in seconds.',
};

/** The API's description of itself, from the same definitions that route and parse. */
export function describeApi(routes: readonly RouteRecord[], version: string): ApiDocument {
  const registry = new OpenAPIRegistry();
  registry.registerComponent('securitySchemes', 'cookie', { type: 'apiKey', in: 'cookie', name: 'halfdeep_access' });
  registry.registerComponent('securitySchemes', 'bearer', { type: 'http', scheme: 'bearer', bearerFormat: 'JWT' });
  for (const record of routes) registry.registerPath(pathConfig(record));
  return new OpenApiGeneratorV31(registry.definitions).generateDocument({
    openapi: '3.1.0',
    info: {
      title: 'Halfdeep',
      version,
      description:
        'Idealised one-and-a-half-layer ocean experiments. Errors are problem details (RFC 9457). Scripts sign in with ' +
        'POST /api/session?token=1 and send the access token as a bearer token; POST takes an Idempotency-Key.',
      license: { name: 'MIT' },
    },
    servers: [{ url: '/' }],
  });
}

/** The path as OpenAPI writes it: `/api/runs/{id}/stop`. */
export const openApiPath = (path: string) => `/api${path.replace(/:(\w+)/g, '{$1}')}`;

/** `run.stop` at POST /runs/:id/stop: unique, and readable in generated clients. */
const operationId = ({ method, path }: RouteRecord) =>
  [method, ...path.split(/[^A-Za-z]+/).filter(Boolean)]
    .map((word, k) => (k === 0 ? word : word[0].toUpperCase() + word.slice(1)))
    .join('');

function whoMay({ action }: RouteRecord): string {
  const rows = policyRows(action).map(([, who, whose, states]) => {
    const own = whose === 'own' ? ', in an own experiment' : '';
    return `${who}${own}${states === 'any' ? '' : `, while ${states.join(', ')}`}`;
  });
  return `Who: ${rows.join('; ')}.`;
}

/** A file is text as it is, or bytes. */
const fileSchema = (media: string) => ({
  type: 'string' as const,
  ...(media.startsWith('text/') ? {} : { format: 'binary' }),
});

function pathConfig(record: RouteRecord): RouteConfig {
  const { method, path, summary, params, query, body, answer, media, status, action } = record;
  const content = answer
    ? { 'application/json': { schema: answer } }
    : media
      ? Object.fromEntries([media].flat().map((type) => [type, { schema: fileSchema(type) }]))
      : undefined;
  const refusals = [
    ...(params ? [400, 404] : query ? [400] : []),
    ...(isOpen(action) ? [] : [401, 403]),
    ...(body ? [400, 422] : []),
    ...(policyRows(action).some(([, , , states]) => states !== 'any') ? [409] : []),
    ...(isOpen(action) && method === 'post' ? [401, 429] : []),
  ];
  const problem = { 'application/problem+json': { schema: problemSchema } };
  return {
    method,
    path: openApiPath(path),
    operationId: operationId(record),
    tags: [path.split('/')[1]],
    summary,
    description: whoMay(record),
    security: isOpen(action) ? [] : [{ cookie: [] }, { bearer: [] }],
    request: {
      ...(params && { params: params as z.ZodObject }),
      ...(query && { query: query as z.ZodObject }),
      ...(body && { body: { required: true, content: { 'application/json': { schema: body } } } }),
    },
    responses: {
      [status]: { description: 'Done.', ...(content && { content }) },
      ...Object.fromEntries(refusals.map((code) => [code, { description: REFUSALS[code], content: problem }])),
    },
  };
}
