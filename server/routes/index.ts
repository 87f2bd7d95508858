/** Every route of the API, in the order of the document. */
import type { AppContext } from '@/server/context';
import type { Route } from '@/server/http/route';
import { captureExportRoutes } from './capture-export';
import { captureSignalRoutes } from './capture-signal';
import { captureUploadRoutes } from './capture-upload';
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
    ...captureUploadRoutes(context),
    ...captureExportRoutes(context),
    ...hubRoutes(context),
  ];
}
