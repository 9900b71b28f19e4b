import type { z } from 'zod';

/** Queues are partitions that a migration made; a kind of work chooses one. */
export type QueueName = 'long' | 'short';

/** A kind of work, apart from the code that does it: whoever starts a run needs this alone. */
export interface JobDefinition<
  Kind extends string = string,
  Payload extends z.ZodType = z.ZodType,
  Result extends z.ZodType = z.ZodType,
> {
  /** `entity.verb`. */
  readonly kind: Kind;
  /** `short` for a second or two, `long` for what may keep all cores busy. */
  readonly queue: QueueName;
  /** Small: identifiers and settings, never data. */
  readonly payload: Payload;
  readonly result: Result;
  /** How many workers may be lost over it before the run is given up; an error that the work itself throws is not tried again. */
  readonly mostAttempts?: number;
  /** It reads rows of a sample, so it is started with the sample it reads: an erasure ends it. */
  readonly readsRows?: true;
}

/**
 * @example
 * export const verifyRecordJob = defineJob({ kind: 'record.verify', queue: 'long', payload: z.strictObject({}), result: RecordVerification });
 */
export function defineJob<const Kind extends string, Payload extends z.ZodType, Result extends z.ZodType>(
  definition: JobDefinition<Kind, Payload, Result>,
): JobDefinition<Kind, Payload, Result> {
  return definition;
}

export const usualAttempts = 3;
