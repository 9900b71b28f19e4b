import type { Endpoint } from '@tallystone/contracts/endpoint';
import { problemCodes } from '@tallystone/contracts/problems/codes';
import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import express, { type Request, type RequestHandler, type Response, type Router } from 'express';
import type { Transaction } from 'sequelize';
import type { Context } from '../../context';
import { inTransaction } from '../../database/transaction';
import { requestSeconds } from '../../logging/metrics';
import { demand } from '../../policies/decision';
import { problemsOf } from '../../problems/from-error';
import { Problem, invalid, notFound } from '../../problems/problem';
import { finished, requestIdOf } from './callback';
import { checkCrossSite } from './cross-site';
import { matchRevision, tagOf } from './entity-tag';
import { once } from './idempotency';
import { limitRequests } from './limit';
import { personOf } from './person-of';
import type { Access, Call, Route } from './route';

const changes = (endpoint: Endpoint): boolean => endpoint.method !== 'GET' && endpoint.method !== 'HEAD';

/** Mounts routes on a router, each as the chain of its recipe's steps. */
export function mountRoutes(router: Router, context: Context, routes: readonly Route[]): void {
  const limit = limitRequests();
  for (const route of routes) {
    const method = route.endpoint.method.toLowerCase() as 'get' | 'head' | 'post' | 'put' | 'patch' | 'delete';
    router[method](route.endpoint.path, measure(route.endpoint), limit, handlerOf(context, route));
  }
}

function measure(endpoint: Endpoint): RequestHandler {
  return (_request, response, next) => {
    const end = requestSeconds.startTimer({ method: endpoint.method, route: endpoint.path });
    response.once('close', () => end({ status: String(response.statusCode) }));
    next();
  };
}

function handlerOf(context: Context, route: Route): RequestHandler {
  const { endpoint, recipe } = route;
  const readJson = express.json({ limit: recipe.largestBody ?? 256 * 1024, strict: false });
  return async (request, response) => {
    const person = await personOf(context, request);
    if (route.access === 'signed-in' && !person) {
      throw new Problem(401, problemCodes.signedOut, 'You are signed out. Sign in and try again.');
    }
    if (changes(endpoint)) checkCrossSite(context.config, request, person !== null);
    if (recipe.admit) demand(recipe.admit(person));
    const { call, refusal } = await read(context, endpoint, person, request, response, readJson);
    if (refusal && !recipe.find && !recipe.authorise) throw refusal;

    const steps = async (tx: Transaction | null): Promise<unknown> => {
      const inside: Call<Endpoint, Access> = { ...call, tx: tx as never };
      const subject = recipe.find ? await recipe.find(inside) : undefined;
      if (subject === null) throw notFound();
      const found = { ...inside, subject } as never;
      if (recipe.authorise) demand(await recipe.authorise(found));
      if (refusal) throw refusal;
      if (recipe.permit) demand(await recipe.permit(found));
      const answer = await recipe.act(found);
      // Remembered so that `afterwards` sees the same subject.
      settled = found;
      return present(endpoint, answer);
    };
    let settled: never = call as never;

    if (recipe.streams) {
      await steps(null);
      return;
    }
    let body: unknown;
    if (!changes(endpoint) || recipe.ownTransactions) body = await steps(null);
    else if (recipe.idempotent && person)
      body = await once(context, { person, request, endpoint, body: call.body }, response, steps);
    else body = await inTransaction(context.sequelize, steps);
    if (recipe.afterwards) await recipe.afterwards(settled);
    send(endpoint, response, body);
  };
}

async function read(
  context: Context,
  endpoint: Endpoint,
  person: Call<Endpoint, Access>['person'],
  request: Request,
  response: Response,
  readJson: RequestHandler,
): Promise<{ call: Call<Endpoint, Access>; refusal: Problem | null }> {
  const wantsJson = endpoint.body !== undefined && endpoint.body !== 'bytes';
  if (wantsJson) {
    if (hasBody(request) && !request.is('application/json')) {
      throw new Problem(415, problemCodes.unsupported, 'This route reads JSON (Content-Type: application/json).');
    }
    await finished((done) => readJson(request, response, done));
  }
  // A row that cannot exist is a row that does not: an identifier that is no uuid is not found rather than invalid.
  const params = endpoint.params?.safeParse(request.params);
  if (params && !params.success) throw notFound();
  const problems: ProblemItem[] = [];
  const query = endpoint.query?.safeParse(request.query);
  if (query && !query.success) problems.push(...problemsOf(query.error, 'query'));
  const body = wantsJson ? endpoint.body.safeParse(request.body ?? {}) : undefined;
  if (body && !body.success) problems.push(...problemsOf(body.error, 'body'));
  const refusal = problems.length > 0 ? invalid(problems) : null;
  const call: Call<Endpoint, Access> = {
    context,
    person,
    params: params?.data ?? {},
    query: query?.data ?? {},
    body: body?.data as never,
    tx: null as never,
    subject: undefined,
    request,
    response,
    requestId: requestIdOf(request),
    address: request.ip ?? 'unknown',
    match: (revision) => matchRevision(request, revision),
    tag: (revision) => void response.setHeader('ETag', tagOf(revision)),
  };
  return { call, refusal };
}

const hasBody = (request: Request): boolean =>
  request.headers['transfer-encoding'] !== undefined || Number(request.headers['content-length'] ?? 0) > 0;

/** Holds the answer to its schema: what the contract does not name never leaves. */
function present(endpoint: Endpoint, answer: unknown): unknown {
  return typeof endpoint.response === 'string' ? undefined : endpoint.response.parse(answer);
}

function send(endpoint: Endpoint, response: Response, body: unknown): void {
  if (response.headersSent) return;
  if (endpoint.response === 'nothing') response.status(204).end();
  // A status that `act` chose itself stands.
  else response.status(response.statusCode === 200 ? (endpoint.status ?? 200) : response.statusCode).json(body);
}
