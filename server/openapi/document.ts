/** The OpenAPI 3.1 document, made of the route values and the zod contract. */
import { OpenAPIRegistry, OpenApiGeneratorV31 } from '@asteasolutions/zod-to-openapi';
import type { RouteConfig } from '@asteasolutions/zod-to-openapi';
import { problem } from '@/server/contract';
import { problemKinds } from '@/server/http/problems';
import type { ProblemSlug } from '@/server/http/problems';
import type { Route } from '@/server/http/route';
import { ingestPaths } from './ingest-paths';

export type OpenApiDocument = ReturnType<OpenApiGeneratorV31['generateDocument']>;

/** `/rigs/:rigId` as `/rigs/{rigId}`. */
function openApiPath(path: string): string {
  return path.replaceAll(/:(\w+)/g, '{$1}');
}

function problemResponses(slugs: readonly ProblemSlug[]): RouteConfig['responses'] {
  const byStatus = new Map<number, ProblemSlug[]>();
  for (const slug of new Set(slugs)) {
    const { status } = problemKinds[slug];
    byStatus.set(status, [...(byStatus.get(status) ?? []), slug]);
  }
  return Object.fromEntries(
    [...byStatus].map(([status, names]) => [
      status,
      {
        description: names.map((name) => `\`${name}\`: ${problemKinds[name].title}`).join('; '),
        content: { 'application/problem+json': { schema: problem } },
      },
    ]),
  );
}

/** Problems that follow from how a route is mounted, besides its own. */
function impliedProblems(route: Route): ProblemSlug[] {
  return [
    ...(route.access === 'all' ? [] : (['not-signed-in'] as const)),
    ...(route.access === 'engineer' || route.access === 'admin' ? (['forbidden'] as const) : []),
    ...(route.body === undefined ? [] : (['unreadable', 'too-large', 'content-type', 'invalid'] as const)),
    ...(route.query === undefined ? [] : (['invalid'] as const)),
  ];
}

function requestOf(route: Route): RouteConfig['request'] {
  const content = route.rawBody
    ? { [route.rawBody.contentType]: { schema: route.rawBody.schema } }
    : route.body && { 'application/json': { schema: route.body } };
  return {
    ...(route.params ? { params: route.params as never } : {}),
    ...(route.query ? { query: route.query as never } : {}),
    ...(content ? { body: { required: true, content } } : {}),
  };
}

function pathOf(route: Route): RouteConfig {
  const who = route.access === 'all' ? 'Anyone.' : `Needs the role ${route.access}.`;
  return {
    method: route.method,
    path: `/api/v1${openApiPath(route.path)}`,
    tags: [route.tag],
    summary: route.summary,
    description: route.description ? `${who} ${route.description}` : who,
    ...(route.access === 'all' ? {} : { security: [{ accessToken: [] }] }),
    request: requestOf(route),
    responses: {
      ...Object.fromEntries(
        route.answers.map(({ status, description, schema, contentTypes = ['application/json'] }) => [
          status,
          schema === undefined
            ? { description }
            : { description, content: Object.fromEntries(contentTypes.map((type) => [type, { schema }])) },
        ]),
      ),
      ...problemResponses([...route.problems, ...impliedProblems(route)]),
    },
  };
}

export function openApiDocument(routes: readonly Route[], version: string): OpenApiDocument {
  const registry = new OpenAPIRegistry();
  registry.registerComponent('securitySchemes', 'accessToken', {
    type: 'http',
    scheme: 'bearer',
    bearerFormat: 'JWT',
    description: 'From POST /api/v1/session; good for 15 min.',
  });
  registry.registerComponent('securitySchemes', 'rigKey', {
    type: 'http',
    scheme: 'bearer',
    bearerFormat: 'JWT',
    description: 'A rig key, made on the rig’s Connect page; may only send samples for its rig.',
  });
  for (const path of [...routes.map(pathOf), ...ingestPaths]) registry.registerPath(path);
  return new OpenApiGeneratorV31(registry.definitions).generateDocument({
    openapi: '3.1.0',
    info: {
      title: 'Turnmark',
      version,
      description:
        'Rigs, live speed and kept captures. Instants are RFC 3339 in UTC, durations and positions in seconds. ' +
        'Errors are RFC 9457 problems with a stable `type`. Members may be added: ignore those you do not know. ' +
        'This is a bench instrument: no safety function, not for overspeed protection or legal measurement.',
    },
    servers: [{ url: '/' }],
  });
}
