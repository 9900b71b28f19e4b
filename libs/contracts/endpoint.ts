import type { z } from 'zod';

/** What the server answers with: a schema, or the kind of a body that is not JSON. */
export type ResponseShape = z.ZodType | 'bytes' | 'events' | 'nothing';

/**
 * One operation of the API, stated once for the server, the client and the OpenAPI document.
 *
 * `path` is written as Express writes it, from the origin: `/api/people/:personId`. Bodies and queries are strict: an unknown key is a problem.
 */
export interface Endpoint {
  readonly method: 'GET' | 'HEAD' | 'POST' | 'PUT' | 'PATCH' | 'DELETE';
  readonly path: `/${string}`;
  readonly summary: string;
  readonly params?: z.ZodType;
  readonly query?: z.ZodType;
  /** A schema for JSON, `'bytes'` where the body is a stream that the route reads itself. */
  readonly body?: z.ZodType | 'bytes';
  readonly response: ResponseShape;
  /** Status of success; 200 when absent, 204 for `'nothing'`. */
  readonly status?: number;
}

/**
 * States an endpoint and keeps its exact types.
 *
 * @example
 * export const readPerson = defineEndpoint({ method: 'GET', path: '/api/people/:personId', summary: 'One person', params: PersonParams, response: Person });
 */
export function defineEndpoint<const E extends Endpoint>(endpoint: E): E {
  return endpoint;
}

export type ParamsOf<E extends Endpoint> = E extends { params: infer S extends z.ZodType } ? z.output<S> : Record<never, never>;
export type QueryOf<E extends Endpoint> = E extends { query: infer S extends z.ZodType } ? z.output<S> : Record<never, never>;
export type BodyOf<E extends Endpoint> = E extends { body: infer S extends z.ZodType } ? z.output<S> : undefined;
/** What a client sends: the schema's input, where defaults may be left out. */
export type SentBodyOf<E extends Endpoint> = E extends { body: infer S extends z.ZodType } ? z.input<S> : undefined;
export type AnswerOf<E extends Endpoint> = E extends { response: infer S extends z.ZodType } ? z.input<S> : void;
