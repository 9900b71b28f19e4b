import { randomUUID } from 'node:crypto';
import type { Context } from '../../context';
import { channels } from '../../database/listener';
import { rows } from '../../database/sql';
import { Superseded } from '../run-state';
import { problemOfFailure } from '../failure';
import type { PartHandler } from './handler';

/** A lease is longer than the pause between two signs of life by so much that a busy machine does not lose it. */
const leaseSeconds = 10;
const renewEvery = 2000;
/** A part that took its worker with it so often is given up. */
const mostTimes = 3;

interface Taken {
  readonly number: number;
  readonly kind: string;
  readonly payload: unknown;
  readonly timesTaken: number;
}

/**
 * Does one part of a run: takes the first that nobody holds, keeps its lease, and writes its result, unless another has taken it meanwhile. Finding
 * nothing to do is no error.
 */
export async function takePart(
  context: Context,
  handlers: ReadonlyMap<string, PartHandler>,
  runId: string,
  holder: string,
  stopping: AbortSignal,
): Promise<void> {
  const lease = randomUUID();
  const taken = await take(context, runId, holder, lease);
  if (!taken) return;
  const log = context.log.child({ runId, part: taken.number, kind: taken.kind });
  const stop = new AbortController();
  const abort = (): void => stop.abort(stopping.reason);
  stopping.addEventListener('abort', abort, { once: true });
  if (stopping.aborted) abort();
  const renewing = setInterval(() => {
    renew(context, runId, taken.number, lease)
      .then((mine) => {
        if (!mine) stop.abort(new Superseded('This part is no longer wanted of this worker'));
      })
      .catch((error: unknown) => log.warn({ err: error }, 'a lease was not renewed'));
  }, renewEvery);
  try {
    const handler = handlers.get(taken.kind);
    if (!handler) throw new Error(`No handler for parts of ${taken.kind}`);
    const result = handler.definition.result.parse(await handler.work(taken.payload, { context, signal: stop.signal }));
    await end(context, runId, taken.number, lease, { state: 'done', result: JSON.stringify(result), problem: null });
  } catch (cause) {
    if (stop.signal.aborted) await giveBack(context, runId, taken.number, lease);
    else {
      log.error({ err: cause }, 'a part failed');
      await end(context, runId, taken.number, lease, {
        state: 'failed',
        result: null,
        problem: JSON.stringify(problemOfFailure(cause)),
      });
    }
  } finally {
    clearInterval(renewing);
    stopping.removeEventListener('abort', abort);
  }
}

/** Takes a part of a run that is at work. One that has lost its worker too often fails instead. */
async function take({ sequelize }: Context, runId: string, holder: string, lease: string): Promise<Taken | null> {
  const [taken] = await rows<Taken>(
    sequelize,
    `UPDATE run_parts SET holder = $2, lease = $3, times_taken = times_taken + 1,
       lease_until = clock_timestamp() + make_interval(secs => ${leaseSeconds}),
       state = CASE WHEN times_taken >= ${mostTimes} THEN 'failed' ELSE state END,
       problem = CASE WHEN times_taken >= ${mostTimes}
         THEN jsonb_build_object('code', 'worker-lost', 'message', 'Workers were lost ${mostTimes} times over a part of this work.', 'where', '{}'::jsonb) END
     WHERE (run_id, number) = (
       SELECT p.run_id, p.number FROM run_parts p JOIN runs r ON r.id = p.run_id
       WHERE p.run_id = $1 AND r.state = 'running' AND p.state = 'open' AND (p.lease_until IS NULL OR p.lease_until < clock_timestamp())
       ORDER BY p.number LIMIT 1 FOR UPDATE OF p SKIP LOCKED)
     RETURNING number, kind, payload, times_taken AS "timesTaken"`,
    [runId, holder, lease],
  );
  return taken && taken.timesTaken <= mostTimes ? taken : null;
}

/** Whether the part is still this lease's and its run still at work. */
async function renew({ sequelize }: Context, runId: string, number: number, lease: string): Promise<boolean> {
  const renewed = await rows(
    sequelize,
    `UPDATE run_parts p SET lease_until = clock_timestamp() + make_interval(secs => ${leaseSeconds}) FROM runs r
     WHERE r.id = p.run_id AND r.state = 'running' AND p.run_id = $1 AND p.number = $2 AND p.lease = $3 AND p.state = 'open' RETURNING p.number`,
    [runId, number, lease],
  );
  return renewed.length > 0;
}

async function end(
  { sequelize }: Context,
  runId: string,
  number: number,
  lease: string,
  outcome: { state: 'done' | 'failed'; result: string | null; problem: string | null },
): Promise<void> {
  await rows(
    sequelize,
    `WITH ended AS (UPDATE run_parts SET state = $4, result = $5, problem = $6::jsonb, lease_until = NULL
       WHERE run_id = $1 AND number = $2 AND lease = $3 AND state = 'open' RETURNING run_id)
     SELECT pg_notify('${channels.parts}', run_id::text) FROM ended`,
    [runId, number, lease, outcome.state, outcome.result, outcome.problem],
  );
}

/** A worker that stops leaves the part to the others without a black mark. */
async function giveBack({ sequelize }: Context, runId: string, number: number, lease: string): Promise<void> {
  await rows(
    sequelize,
    `WITH back AS (UPDATE run_parts SET lease = NULL, lease_until = NULL, times_taken = times_taken - 1
       WHERE run_id = $1 AND number = $2 AND lease = $3 AND state = 'open' RETURNING run_id)
     SELECT pg_notify('${channels.parts}', run_id::text) FROM back`,
    [runId, number, lease],
  );
}
