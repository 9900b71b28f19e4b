import type { z } from 'zod';
import type { Context } from '../../context';
import type { PartDefinition } from './definition';

export interface PartOptions {
  readonly context: Context;
  /** Aborted when the run has ended or was cancelled, when the part was given to another worker, or when this one stops. */
  readonly signal: AbortSignal;
}

export interface PartHandler {
  readonly definition: PartDefinition;
  readonly work: (payload: unknown, options: PartOptions) => Promise<unknown>;
}

/** Ties a part's definition to the code that does it. */
export function handlePart<Payload extends z.ZodType, Result extends z.ZodType>(
  definition: PartDefinition<Payload, Result>,
  work: (payload: z.output<Payload>, options: PartOptions) => Promise<z.input<Result>>,
): PartHandler {
  return { definition, work: (payload, options) => work(definition.payload.parse(payload), options) };
}
