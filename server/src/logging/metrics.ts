import { type Server, createServer } from 'node:http';
import { Counter, Histogram, collectDefaultMetrics, register } from 'prom-client';

export const requestSeconds = new Histogram({
  name: 'tallystone_http_request_seconds',
  help: 'Time from a request to the end of its answer',
  labelNames: ['method', 'route', 'status'] as const,
  buckets: [0.005, 0.02, 0.06, 0.2, 0.5, 1, 3, 10],
});

export const runsEnded = new Counter({
  name: 'tallystone_runs_ended_total',
  help: 'Runs that came to an end in this process',
  labelNames: ['kind', 'state'] as const,
});

/** Serves the Prometheus text format on loopback only. */
export async function startMetrics(port: number): Promise<Server> {
  collectDefaultMetrics({ prefix: 'tallystone_' });
  const server = createServer((_request, response) => {
    register.metrics().then(
      (text) => response.writeHead(200, { 'Content-Type': register.contentType }).end(text),
      () => response.writeHead(500).end(),
    );
  });
  await new Promise<void>((resolve, reject) => server.once('error', reject).listen(port, '127.0.0.1', resolve));
  return server;
}
