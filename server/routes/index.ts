/** Every route of the API, in the order of the document. */
import type { AppContext } from '@/server/context';
import type { Route } from '@/server/http/route';
import { captureFileRoutes } from './capture-files';
import { captureSignalRoutes } from './capture-signal';
import { captureRoutes } from './captures';
import { hubRoutes } from './hub';
import { keyRoutes } from './keys';
import { rigRoutes } from './rigs';
import { sessionRoutes } from './session';
import { settingsRoutes } from './settings';

export function apiRoutes(context: AppContext): Route[] {
  return [
    ...sessionRoutes({ ...context, limits: context.attemptLimits }),
    ...rigRoutes(context),
    ...keyRoutes(context),
    ...settingsRoutes(context),
    ...captureRoutes(context),
    ...captureSignalRoutes(context),
    ...captureFileRoutes(context),
    ...hubRoutes(context),
  ];
}
