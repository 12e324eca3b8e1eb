import { type Router } from 'express';
import { type Observable } from 'rxjs';
import { type AccessRevoked } from '../accounts/session-service';
import { adminQueueRoutes } from '../admin-queue/admin-queue-routes';
import { convergenceRoutes } from '../convergence/convergence-routes';
import { deskRoutes } from '../desk/desk-routes';
import { eventRoutes } from '../events/event-routes';
import { experimentRoutes } from '../experiments/experiment-routes';
import { presetRoutes } from '../presets/preset-routes';
import { sideBySideRoutes } from '../side-by-side/side-by-side-routes';
import { sliceRoutes } from '../slices/slice-routes';
import { type RunServices } from './compose-runs';
import { runRoutes } from './run-routes';

/** All routes about experiments, runs, their results and the queue. */
export function runFeatureRoutes(services: RunServices, accessRevoked$: Observable<AccessRevoked>): Router[] {
  return [
    experimentRoutes(services),
    runRoutes(services),
    convergenceRoutes(services),
    sliceRoutes(services),
    sideBySideRoutes(services),
    eventRoutes({ events: services.events, accessRevoked$, failed: (error) => services.failed('event stream', error) }),
    deskRoutes(services),
    presetRoutes(),
    adminQueueRoutes(services),
  ];
}
