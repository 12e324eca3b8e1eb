import { join } from 'node:path';
import compression from 'compression';
import cookieParser from 'cookie-parser';
import express, { Router, type Express, type Request, type Response } from 'express';
import * as z from 'zod';
import { accountRoutes } from './accounts/account-routes';
import { authenticate } from './accounts/authenticate';
import { peopleRoutes } from './admin-people/people-routes';
import { type Services } from './compose-services';
import { healthRoutes } from './health/health-routes';
import { VERSION } from './health/version';
import { logRequests } from './http/logger';
import { describeApi } from './http/openapi';
import { nothingHere, problemBoundary } from './http/problem-boundary';
import { jsonOnly, sameOriginOnly } from './http/request-guards';
import { route, routesOf, type RouteFrame, type RouteRecord } from './http/route';
import { securityHeaders } from './http/security-headers';
import { staticClient } from './http/static-client';
import { projectFolder } from './project-folder';
import { runFeatureRoutes } from './runs/run-features';
import { verificationRoutes } from './verification/verification-routes';

export interface AppOptions {
  /** Folder of the built client; without it the API stands alone. */
  webFolder?: string;
  /** Tests: check every answer against its schema. */
  checkAnswers?: boolean;
  /** Folder of the verification report; that of the project when left out. */
  verificationFolder?: string;
  /** Tests: more open requests an address than usual. */
  openRequests?: number;
}

/** Builds the application on its services; it does not listen. Throws when a route has no place in the policy table. */
export function buildApp(services: Services, options: AppOptions = {}): Express {
  const { settings, logger } = services;
  const app = express();
  app.disable('x-powered-by');
  // HTTPS ends at a proxy: only then are its headers believed.
  app.set('trust proxy', settings.https ? 1 : false);
  app.locals['frame'] = {
    answerOnce: services.answerOnce,
    checkAnswers: options.checkAnswers ?? false,
  } satisfies RouteFrame;

  app.use(securityHeaders(settings.https));
  app.use(logRequests(logger));
  app.use(compression({ filter: worthCompressing }));

  const routers = [
    healthRoutes(services),
    accountRoutes({ ...services, openRequests: options.openRequests }),
    peopleRoutes(services),
    ...runFeatureRoutes(services.runs, services.sessions.accessRevoked$),
    verificationRoutes({
      folder: options.verificationFolder ?? join(projectFolder(), 'data', 'verification'),
      coreVersion: services.coreVersion,
    }),
  ];
  const described = describingRouter(() => routes);
  const routes = [...routers, described].flatMap(routesOf);
  app.locals['routes'] = routes;
  const api = Router();
  api.use((_req, res, next) => {
    res.set('Cache-Control', 'private, no-cache');
    next();
  });
  api.use(sameOriginOnly(settings.publicUrl), jsonOnly, express.json({ limit: '1mb' }), cookieParser());
  api.use(authenticate(services.sessions, services.secrets.accessKey));
  api.use(...routers, described);
  api.use(nothingHere);
  app.use('/api', api);

  if (options.webFolder !== undefined) app.use(staticClient(options.webFolder));
  app.use(nothingHere);
  app.use(problemBoundary(logger));
  return app;
}

/** GET /api/openapi.json, which describes itself too. */
function describingRouter(routes: () => readonly RouteRecord[]): Router {
  const router = Router();
  let document: ReturnType<typeof describeApi> | undefined;
  route(
    router,
    {
      method: 'get',
      path: '/openapi.json',
      action: 'api.describe',
      summary: 'This description, as OpenAPI 3.1.',
      answer: z.looseObject({ openapi: z.string() }).meta({ id: 'OpenApiDocument' }),
    },
    () => Promise.resolve({ ...(document ??= describeApi(routes(), VERSION)) }),
  );
  return router;
}

/** Event streams would be held back, slices of numbers hardly shrink. */
export function worthCompressing(req: Request, res: Response): boolean {
  const type = String(res.getHeader('Content-Type') ?? '');
  return !/event-stream|octet-stream/.test(type) && compression.filter(req, res);
}
