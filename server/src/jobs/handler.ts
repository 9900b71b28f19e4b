import type { Transaction } from 'sequelize';
import type { z } from 'zod';
import type { Context } from '../context';
import type { Log } from '../logging/log';
import type { JobDefinition } from './definitions/job';

/** What a handler knows about its run. */
export interface RunFacts {
  readonly id: string;
  readonly kind: string;
  readonly personId: string;
  readonly modelId: string | null;
  readonly entity: string | null;
  readonly entityId: string | null;
  readonly requestId: string | null;
}

/** What a handler works with beside its payload. */
export interface RunContext<Result> {
  readonly context: Context;
  readonly run: RunFacts;
  /** 1 for the first. Every write of this attempt is refused once another has begun. */
  readonly attempt: number;
  /** Aborted when the run is cancelled, when this attempt is superseded or when the worker stops. Hand it to `runInThread` and look at it in loops. */
  readonly signal: AbortSignal;
  readonly log: Log;
  /** Says how far the work is: a phase in words of product.md, a share of the whole from 0 to 1 or null. Cheap: at most four a second are written. */
  progress(phase: string, share: number | null): void;
  /** A transaction before the end, for what is too large to be written at once. Throws, and writes nothing, when this attempt no longer counts. */
  write<T>(work: (tx: Transaction) => Promise<T>): Promise<T>;
  /** Writes what the work came to and ends the run, in one transaction, exactly once: fenced by the attempt's number under a lock on the run. */
  finish(work: (tx: Transaction) => Promise<Result>): Promise<void>;
}

export interface Handler {
  readonly definition: JobDefinition;
  readonly work: (payload: unknown, run: RunContext<unknown>) => Promise<void>;
  readonly abandon: ((tx: Transaction, run: RunFacts & { readonly outcome: 'failed' | 'cancelled' }) => Promise<void>) | null;
}

/**
 * Ties a job's definition to the code that does it. `abandon` runs in the transaction that ends a run without a result (failed, cancelled,
 * or its workers lost): it removes or marks what the attempts left behind.
 *
 * @example
 * export const verifyRecord = handle(verifyRecordJob, {
 *   async work(payload, { context, signal, progress, finish }) {
 *     const found = await verifyChain(context.pool, { signal, onProgress: (share) => progress('Verifying', share) });
 *     await finish(async () => found);
 *   },
 * });
 */
export function handle<Payload extends z.ZodType, Result extends z.ZodType>(
  definition: JobDefinition<string, Payload, Result>,
  code: {
    readonly work: (payload: z.output<Payload>, run: RunContext<z.input<Result>>) => Promise<void>;
    readonly abandon?: Handler['abandon'];
  },
): Handler {
  return { definition, work: (payload, run) => code.work(definition.payload.parse(payload), run), abandon: code.abandon ?? null };
}
