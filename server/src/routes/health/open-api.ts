import { OpenAPIRegistry, OpenApiGeneratorV31, type RouteConfig } from '@asteasolutions/zod-to-openapi';
import type { Endpoint } from '@tallystone/contracts/endpoint';
import { ProblemDetails } from '@tallystone/contracts/problems/schema';
import type { z } from 'zod';
import type { Route } from '../http/route';

/** The OpenAPI 3.1 document of the routes, made from the same schemas that read their requests and hold their answers. */
export function describeApi(routes: readonly Route[]): Record<string, unknown> {
  const registry = new OpenAPIRegistry();
  for (const route of routes) registry.registerPath(describe(route));
  const document = new OpenApiGeneratorV31(registry.definitions).generateDocument({
    openapi: '3.1.0',
    info: { title: 'Tallystone', version: '1', description: 'Changes need the XSRF-TOKEN cookie repeated in X-XSRF-TOKEN. Problems are RFC 9457.' },
  });
  return document as unknown as Record<string, unknown>;
}

function describe({ endpoint, access, recipe }: Route): RouteConfig {
  return {
    method: endpoint.method.toLowerCase() as RouteConfig['method'],
    path: endpoint.path.replace(/:(\w+)/g, '{$1}'),
    summary: endpoint.summary,
    tags: [endpoint.path.split('/')[2] ?? 'health'],
    request: {
      ...(endpoint.params ? { params: endpoint.params as z.ZodObject } : {}),
      ...(endpoint.query ? { query: endpoint.query as z.ZodObject } : {}),
      ...(endpoint.body ? { body: { content: bodyOf(endpoint.body) } } : {}),
    },
    responses: {
      [String(endpoint.status ?? (endpoint.response === 'nothing' ? 204 : 200))]: { description: 'Done', ...answerOf(endpoint.response) },
      default: { description: access === 'signed-in' ? 'A problem; 401 when signed out' : 'A problem', content: { 'application/problem+json': { schema: ProblemDetails } } },
    },
    ...(recipe.idempotent ? { description: 'Takes an Idempotency-Key.' } : {}),
  };
}

const bodyOf = (body: NonNullable<Endpoint['body']>) =>
  body === 'bytes' ? { 'application/octet-stream': { schema: { type: 'string' as const, format: 'binary' } } } : { 'application/json': { schema: body } };

function answerOf(response: Endpoint['response']) {
  if (response === 'nothing') return {};
  if (response === 'events') return { content: { 'text/event-stream': { schema: { type: 'string' as const } } } };
  if (response === 'bytes') return { content: { 'application/octet-stream': { schema: { type: 'string' as const, format: 'binary' } } } };
  return { content: { 'application/json': { schema: response } } };
}
