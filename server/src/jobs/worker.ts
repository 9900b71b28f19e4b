import { hostname } from 'node:os';
import type PgBoss from 'pg-boss';
import type { Context } from '../context';
import { channels } from '../database/listener';
import { sendLetter } from '../mail/send-letter';
import { stopThreads } from '../threads/run-in-thread';
import { type Attempt, attemptRun } from './attempt';
import type { Handler } from './handler';
import { handlers as allHandlers } from './handlers/index';
import { partHandlers as allPartHandlers } from './handlers/parts';
import type { PartHandler } from './parts/handler';
import { takePart } from './parts/take-part';
import { Stopping } from './run-state';
import { sweep, tidy } from './sweep';

export interface WorkerService {
  /** Gives runs under way back to the queue and ends. */
  stop(): Promise<void>;
}

const sweepEvery = 2000;
const tidyEvery = 3_600_000;

/**
 * Takes work from the queues until stopped. Any number of workers on any number of machines may share a database.
 */
export async function startWorker(
  context: Context,
  list: readonly Handler[] = allHandlers,
  partList: readonly PartHandler[] = allPartHandlers,
): Promise<WorkerService> {
  const { boss, listener, log, config } = context;
  const handlers = new Map(list.map((handler) => [handler.definition.kind, handler]));
  const parts = new Map(partList.map((handler) => [handler.definition.kind, handler]));
  const stopping = new AbortController();
  const takingParts = new Set<Promise<void>>();
  const name = `${hostname()}:${process.pid}`;
  const active = new Map<string, Attempt>();
  const takers: string[] = [];

  const take = async (jobs: PgBoss.Job<{ runId: string }>[]): Promise<void> => {
    for (const job of jobs) await attemptRun(context, handlers, { id: job.id, runId: job.data.runId }, name, active);
  };
  const options = { batchSize: 1, pollingIntervalSeconds: 2 };
  for (let count = 0; count < config.longRuns; count++) takers.push(await boss.work('long', options, take));
  for (let count = 0; count < 2; count++) takers.push(await boss.work('short', options, take));
  // A part keeps one thread busy: as many at once as there are threads.
  for (let count = 0; count < config.threads.count; count++) {
    takers.push(await boss.work('part', options, async (jobs: PgBoss.Job<{ runId: string }>[]) => {
      for (const { data } of jobs) {
        const taking = takePart(context, parts, data.runId, name, stopping.signal);
        takingParts.add(taking);
        await taking.finally(() => takingParts.delete(taking));
      }
    })); // prettier-ignore
  }
  takers.push(await boss.work<{ mailId: string }>('mail', options, async (jobs) => {
    for (const job of jobs) await sendLetter(context, job.data.mailId);
  })); // prettier-ignore

  const wake = (): void => takers.forEach((id) => boss.notifyWorker(id));
  let sweeping: Promise<void> = Promise.resolve();
  const sweepNow = (): void => {
    sweeping = sweeping
      .then(() => sweep(context, handlers))
      .catch((error: unknown) => log.warn({ err: error }, 'a sweep failed'));
  };
  const unsubscribe = [
    listener.on(channels.queue, wake),
    listener.on(channels.cancel, (runId) => {
      active.get(runId)?.look();
      sweepNow();
    }),
    listener.onReconnect(wake),
  ];
  const timers = [
    setInterval(sweepNow, sweepEvery),
    setInterval(() => void tidy(context).catch((error: unknown) => log.warn({ err: error }, 'tidying failed')), tidyEvery),
  ];
  log.info({ worker: name }, 'worker ready');

  return {
    async stop() {
      for (const timer of timers) clearInterval(timer);
      for (const end of unsubscribe) end();
      for (const queue of ['long', 'short', 'part', 'mail']) await boss.offWork(queue);
      for (const attempt of active.values()) attempt.abort(new Stopping('The worker stops'));
      stopping.abort(new Stopping('The worker stops'));
      const patience = Date.now() + 10_000;
      while (active.size + takingParts.size > 0 && Date.now() < patience) await new Promise((resolve) => setTimeout(resolve, 50));
      await sweeping;
      await stopThreads();
    },
  };
}
