import { OpenAPIRegistry, OpenApiGeneratorV31, type RouteConfig } from '@asteasolutions/zod-to-openapi';
import type { Endpoint } from '@tallystone/contracts/endpoint';
import { ProblemDetails } from '@tallystone/contracts/problems/schema';
import { z } from 'zod';
import type { Route } from '../http/route';

type JsonSchema = Record<string, unknown>;

/**
 * The OpenAPI 3.1 document of the routes, made from the same schemas that read their requests and hold their answers. Zod itself turns the
 * schemas into JSON Schema (the dialect of OpenAPI 3.1), because it also knows what to do with the ones that have no counterpart there.
 */
export function describeApi(routes: readonly Route[]): Record<string, unknown> {
  const registry = new OpenAPIRegistry();
  const names = new Map<z.ZodType, string>();
  const refer = (schema: z.ZodType, io: 'input' | 'output'): { $ref: string } => {
    let name = names.get(schema);
    if (name === undefined) {
      name = nameOf(schema, names);
      names.set(schema, name);
      // JSON Schema as zod writes it is a schema of OpenAPI 3.1; the generator's types name fewer keywords.
      registry.registerComponent('schemas', name, toJsonSchema(schema, io));
    }
    return { $ref: `#/components/schemas/${name}` };
  };
  for (const route of routes) registry.registerPath(describe(route, refer));
  const document = new OpenApiGeneratorV31(registry.definitions).generateDocument({
    openapi: '3.1.0',
    info: {
      title: 'Tallystone',
      version: '1',
      description: 'Changes need the XSRF-TOKEN cookie repeated in X-XSRF-TOKEN. Problems are RFC 9457.',
    },
  });
  return JSON.parse(JSON.stringify(document)) as Record<string, unknown>;
}

function describe(
  { endpoint, access, recipe }: Route,
  refer: (schema: z.ZodType, io: 'input' | 'output') => { $ref: string },
): RouteConfig {
  const { response, body } = endpoint;
  const status = String(endpoint.status ?? (response === 'nothing' ? 204 : 200));
  return {
    method: endpoint.method.toLowerCase() as RouteConfig['method'],
    path: endpoint.path.replace(/:(\w+)/g, '{$1}'),
    summary: endpoint.summary,
    tags: [endpoint.path.split('/')[2] ?? 'health'],
    ...(recipe.idempotent ? { description: 'Takes an Idempotency-Key.' } : {}),
    parameters: [...parametersOf(endpoint.params, 'path'), ...parametersOf(endpoint.query, 'query')],
    ...(body ? { requestBody: { required: true, content: contentOf(body, (schema) => refer(schema, 'input')) } } : {}),
    responses: {
      [status]: {
        description: 'Done',
        ...(response === 'nothing' ? {} : { content: contentOf(response, (schema) => refer(schema, 'output')) }),
      },
      default: {
        description: access === 'signed-in' ? 'A problem; 401 when signed out' : 'A problem',
        content: { 'application/problem+json': { schema: refer(ProblemDetails, 'output') } },
      },
    },
  };
}

function contentOf(
  shape: 'bytes' | 'events' | z.ZodType,
  refer: (schema: z.ZodType) => { $ref: string },
): Record<string, { schema: { $ref: string } | { type: 'string'; format?: string } }> {
  if (shape === 'bytes') return { 'application/octet-stream': { schema: { type: 'string' as const, format: 'binary' } } };
  if (shape === 'events') return { 'text/event-stream': { schema: { type: 'string' as const } } };
  return { 'application/json': { schema: refer(shape) } };
}

function parametersOf(schema: Endpoint['query'], place: 'path' | 'query') {
  if (!schema) return [];
  const { properties = {}, required = [] } = toJsonSchema(schema, 'input') as {
    properties?: Record<string, JsonSchema>;
    required?: string[];
  };
  return Object.entries(properties).map(([name, property]) => ({
    name,
    in: place,
    required: place === 'path' || required.includes(name),
    schema: property as never,
  }));
}

function toJsonSchema(schema: z.ZodType, io: 'input' | 'output'): JsonSchema {
  // A registry without names: every nested schema is written out where it stands, so that no reference leads out of the document.
  const { $schema: _, ...rest } = z.toJSONSchema(schema, {
    io,
    unrepresentable: 'any',
    reused: 'inline',
    metadata: z.registry(),
  }) as JsonSchema;
  return rest;
}

function nameOf(schema: z.ZodType, taken: ReadonlyMap<z.ZodType, string>): string {
  const wanted = z.globalRegistry.get(schema)?.id ?? 'Schema';
  const names = new Set(taken.values());
  for (let count = 1; ; count++) {
    const name = count === 1 ? wanted : `${wanted}${count}`;
    if (!names.has(name)) return name;
  }
}
