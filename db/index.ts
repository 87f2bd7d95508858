/** What the hub uses of the database room. */
export * from './captures';
export * from './errors';
export * from './open';
export * from './spool-types';
export * from './queries/audit';
export * from './queries/captures';
export * from './queries/common';
export * from './queries/hub-values';
export * from './queries/idempotency';
export * from './queries/keys';
export * from './queries/page';
export * from './queries/people';
export * from './queries/rigs';
export * from './queries/sessions';
export * from './queries/settings';
export type { TurnmarkDb } from './schema';
export type { Role as PersonRole } from './schema/person';
