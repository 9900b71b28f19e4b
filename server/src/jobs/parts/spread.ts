import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import type { z } from 'zod';
import type { Context } from '../../context';
import { channels } from '../../database/listener';
import { rows } from '../../database/sql';
import { inTransaction } from '../../database/transaction';
import { Problem } from '../../problems/problem';
import type { RunContext } from '../handler';
import { within } from '../queue';
import type { PartDefinition } from './definition';

/** How often the run looks by itself; a part that is done says so at once. */
const lookEvery = 1000;
/** Jobs of parts that nobody has begun are sent again after this: a worker may have died between taking a job and its part. */
const patience = 5000;

interface Standing {
  readonly done: number;
  readonly failed: number;
  readonly resting: number;
}

/**
 * Spreads a run over all workers of the installation: one part for each payload, done in any order by whoever is free, on any machine. Returns the
 * results in the order of the payloads. Parts that an earlier attempt of this run finished are not done again; those whose worker is lost are given to
 * another.
 *
 * @throws Problem with what a part failed of; the signal's reason when the run is cancelled
 * @example
 * const draws = (await spread(inside, resamplePart, payloads, (share) => progress('Refitting resamples', share))).flat();
 */
export async function spread<Payload extends z.ZodType, Result extends z.ZodType>(
  { context, run, signal, write }: Pick<RunContext<unknown>, 'context' | 'run' | 'signal' | 'write'>,
  definition: PartDefinition<Payload, Result>,
  payloads: readonly z.input<Payload>[],
  onProgress: (share: number) => void,
): Promise<z.output<Result>[]> {
  await write(async (tx) => {
    for (const [number, payload] of payloads.entries()) {
      await rows(
        context.sequelize,
        'INSERT INTO run_parts (run_id, number, kind, payload) VALUES ($1, $2, $3, $4::jsonb) ON CONFLICT DO NOTHING RETURNING number',
        [run.id, number, definition.kind, JSON.stringify(definition.payload.parse(payload))],
        tx,
      );
    }
  });
  const look = new Looker();
  const unsubscribe = [
    context.listener.on(channels.parts, (runId) => {
      if (runId === run.id) look.now();
    }),
    context.listener.onReconnect(() => look.now()),
  ];
  signal.addEventListener('abort', look.now, { once: true });
  try {
    let sentAt = 0;
    for (;;) {
      signal.throwIfAborted();
      const standing = await standingOf(context, run.id);
      if (standing.failed > 0) throw await problemOf(context, run.id);
      onProgress(standing.done / payloads.length);
      if (standing.done === payloads.length) break;
      if (standing.resting > 0 && Date.now() - sentAt > patience) {
        await sendJobs(context, run.id, standing.resting);
        sentAt = Date.now();
      }
      await look.next(lookEvery);
    }
  } finally {
    for (const end of unsubscribe) end();
    signal.removeEventListener('abort', look.now);
  }
  const results = await rows<{ result: string }>(
    context.sequelize,
    'SELECT result FROM run_parts WHERE run_id = $1 ORDER BY number',
    [run.id],
  );
  return results.map(({ result }) => definition.result.parse(JSON.parse(result)));
}

/** Waits for a sign or for a time, whichever comes first; a sign that comes in between is not lost. */
class Looker {
  private wake: (() => void) | null = null;
  private pending = false;

  readonly now = (): void => {
    this.pending = true;
    this.wake?.();
  };

  async next(milliseconds: number): Promise<void> {
    if (!this.pending) {
      await new Promise<void>((resolve) => {
        const timer = setTimeout(resolve, milliseconds);
        this.wake = () => {
          clearTimeout(timer);
          resolve();
        };
      });
    }
    this.wake = null;
    this.pending = false;
  }
}

/** Resting: open, and held by nobody whose lease still runs. */
async function standingOf({ sequelize }: Context, runId: string): Promise<Standing> {
  const [standing] = await rows<Standing>(
    sequelize,
    `SELECT count(*) FILTER (WHERE state = 'done')::int AS done, count(*) FILTER (WHERE state = 'failed')::int AS failed,
       count(*) FILTER (WHERE state = 'open' AND (lease_until IS NULL OR lease_until < clock_timestamp()))::int AS resting
     FROM run_parts WHERE run_id = $1`,
    [runId],
  );
  return standing;
}

/** As many jobs as there are parts that wait. A job carries the run alone: whoever takes it takes the next part that nobody holds. */
async function sendJobs(context: Context, runId: string, count: number): Promise<void> {
  const { sequelize, boss } = context;
  await inTransaction(sequelize, async (tx) => {
    const db = within(sequelize, tx);
    const [{ waiting }] = await rows<{ waiting: number }>(
      sequelize,
      `SELECT count(*)::int AS waiting FROM pgboss.job WHERE name = 'part' AND state = 'created' AND data ->> 'runId' = $1`,
      [runId],
      tx,
    );
    for (let job = waiting; job < count; job++) await boss.send('part', { runId }, { db });
    await rows(sequelize, `SELECT pg_notify('${channels.queue}', 'part')`, [], tx);
  });
}

async function problemOf({ sequelize }: Context, runId: string): Promise<Problem> {
  const [{ problem }] = await rows<{ problem: ProblemItem }>(
    sequelize,
    `SELECT problem FROM run_parts WHERE run_id = $1 AND state = 'failed' ORDER BY number LIMIT 1`,
    [runId],
  );
  return new Problem(422, problem.code, problem.message, { problems: [problem] });
}
