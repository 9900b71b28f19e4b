import { randomUUID } from 'node:crypto';
import type { RequestHandler } from 'express';
import { pinoHttp } from 'pino-http';
import type { Log } from '../../logging/log';

const acceptable = /^[\w.-]{8,64}$/;

/** One line per request, without headers, query or body; its id goes back in X-Request-Id and along with the work it starts. */
export function logRequests(log: Log): RequestHandler {
  return pinoHttp({
    logger: log,
    genReqId(request, response) {
      const sent = request.headers['x-request-id'];
      const id = typeof sent === 'string' && acceptable.test(sent) ? sent : randomUUID();
      response.setHeader('X-Request-Id', id);
      return id;
    },
    autoLogging: { ignore: (request) => request.url?.startsWith('/health/') ?? false },
    serializers: {
      req: (request: { id: string; method: string; url: string }) => ({
        id: request.id,
        method: request.method,
        path: pathOf(request.url),
      }),
      res: (response: { statusCode: number }) => ({ status: response.statusCode }),
    },
    customLogLevel: (_request, response, error) => (error || response.statusCode >= 500 ? 'error' : 'info'),
  }) as RequestHandler;
}

/** An invitation's address holds its token. */
const pathOf = (url: string): string => url.split('?')[0].replace(/^\/invitation\/.*/, '/invitation/…');
