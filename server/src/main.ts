import type { Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import { join } from 'node:path';
import { buildApp } from './app';
import { type Config, ConfigProblem, readConfig } from './config/environment';
import { type Context, openContext } from './context';
import { readiness } from './database/readiness';
import { type WorkerService, startWorker } from './jobs/worker';
import { type Log, createLog } from './logging/log';
import { startMetrics } from './logging/metrics';
import { type Sink, openSink } from './mail/sink';
import { recordHead } from './services/record/verify';
import { ensureSetUpToken } from './services/set-up/set-up';
import { stopThreads } from './threads/run-in-thread';

/**
 * `main --services=web,worker`: serves HTTP, takes work from the queues, or both. Configuration comes from the environment alone. Over an
 * IPC channel it says `{ type: 'ready', url, setUp }` once it can serve, or `{ type: 'failed', message }` before it ends.
 */

const services = new Set((process.argv.find((arg) => arg.startsWith('--services='))?.slice(11) ?? 'web,worker').split(','));
/** How long requests under way may take once the process is asked to stop. */
const drain = 30_000;

async function main(): Promise<void> {
  const unknown = [...services].filter((name) => name !== 'web' && name !== 'worker');
  if (unknown.length > 0)
    throw new ConfigProblem(`--services: there is no service ${unknown.join(', ')}; known are web and worker`);
  const config = readConfig(process.env);
  const log = createLog(config.logLevel);
  const sink =
    config.demo && config.mail.host === null && services.has('worker') ? await openSink(join(config.dataFolder, 'mail')) : null;
  const context = await openContext(sink ? withMailTo(config, sink) : config, log);
  const state = await readiness(context.sequelize);
  if (state !== 'ok')
    throw new ConfigProblem('DATABASE_URL: the migrations of this database are behind; run the migrate command first');
  const head = await recordHead(context.pool);
  log.info({ head }, 'head of the record of actions');

  const worker = services.has('worker') ? await startWorker(context) : null;
  const server = services.has('web') ? await listen(context) : null;
  const metrics = config.metricsPort > 0 ? await startMetrics(config.metricsPort) : null;
  const url = server ? addressOf(config, server) : undefined;
  const token = server ? await ensureSetUpToken(context) : null;
  if (token !== null)
    log.info(
      { file: join(config.dataFolder, 'set-up-token') },
      'the first admin is still to be made; the one-time token lies in the file',
    );

  stopWhenAsked(log, async () => {
    await stop({ context, server, worker, metrics, sink });
  });
  process.send?.({ type: 'ready', url, setUp: token !== null && url ? `${url}set-up (one-time token: ${token})` : undefined });
  log.info({ url, services: [...services] }, 'ready');
}

function listen(context: Context): Promise<Server> {
  const { host, port } = context.config;
  return new Promise((resolve, reject) => {
    const server = buildApp(context).listen(port, host, (error?: Error) => {
      if (!error) resolve(server);
      else if ((error as NodeJS.ErrnoException).code === 'EADDRINUSE')
        reject(new ConfigProblem(`PORT: ${port} is in use by another program`));
      else reject(error);
    });
    // Slow clients: headers within 20 s, a quiet connection is closed after 65 s; uploads may take as long as they send.
    server.headersTimeout = 20_000;
    server.keepAliveTimeout = 65_000;
    server.requestTimeout = 0;
  });
}

function addressOf(config: Config, server: Server): string {
  if (config.origin !== null) return `${config.origin}/`;
  const { port } = server.address() as AddressInfo;
  return `http://${config.host === '127.0.0.1' ? 'localhost' : config.host}:${port}/`;
}

const withMailTo = (config: Config, sink: Sink): Config => ({
  ...config,
  mail: { ...config.mail, host: '127.0.0.1', port: sink.port },
});

interface Running {
  readonly context: Context;
  readonly server: Server | null;
  readonly worker: WorkerService | null;
  readonly metrics: Server | null;
  readonly sink: Sink | null;
}

/** Nothing new is taken on, what is under way is brought to an end, runs go back to the queue. */
async function stop({ context, server, worker, metrics, sink }: Running): Promise<void> {
  context.beginStop();
  const drained = server
    ? new Promise<void>((resolve) => {
        server.close(() => resolve());
        server.closeIdleConnections();
        setTimeout(() => server.closeAllConnections(), drain).unref();
      })
    : Promise.resolve();
  await Promise.all([drained, worker?.stop()]);
  await stopThreads();
  metrics?.close();
  await sink?.close();
  await context.close();
}

function stopWhenAsked(log: Log, work: () => Promise<void>): void {
  let stopping = false;
  const begin = (why: string): void => {
    if (stopping) return;
    stopping = true;
    log.info({ why }, 'stopping');
    work().then(
      () => process.exit(0),
      (error: unknown) => {
        log.error({ err: error }, 'stopping failed');
        process.exit(1);
      },
    );
  };
  process.on('SIGTERM', () => begin('SIGTERM'));
  process.on('SIGINT', () => begin('SIGINT'));
  // Whoever started this process is gone: without them nobody would stop it.
  process.on('disconnect', () => begin('the starting process is gone'));
}

main().catch((error: unknown) => {
  const message =
    error instanceof ConfigProblem ? error.message : error instanceof Error ? (error.stack ?? error.message) : String(error);
  process.stderr.write(`${message}\n`);
  if (process.send)
    process.send(
      { type: 'failed', message: error instanceof ConfigProblem ? message : `The server did not start: ${message}` },
      () => process.exit(1),
    );
  else process.exit(1);
});
