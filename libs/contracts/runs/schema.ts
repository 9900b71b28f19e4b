import { z } from 'zod';
import { ProblemItem } from '../problems/schema';

export const runStates = ['queued', 'running', 'cancelling', 'succeeded', 'failed', 'cancelled'] as const;
export const RunState = z.enum(runStates);
export type RunState = z.infer<typeof RunState>;
export const endedRunStates: readonly RunState[] = ['succeeded', 'failed', 'cancelled'];

/** Work that takes time. `share` is 0 to 1 over the whole run, null where it cannot be told. */
export const Run = z
  .object({
    id: z.uuid(),
    kind: z.string(),
    state: RunState,
    phase: z.string().nullable(),
    share: z.number().min(0).max(1).nullable(),
    attempt: z.int(),
    modelId: z.uuid().nullable(),
    entity: z.string().nullable(),
    entityId: z.string().nullable(),
    startedBy: z.string(),
    createdAt: z.string(),
    startedAt: z.string().nullable(),
    endedAt: z.string().nullable(),
    /** What the work ended with; the shape is stated by the kind of run. */
    result: z.unknown(),
    problem: ProblemItem.nullable(),
    abilities: z.array(z.enum(['cancel'])),
  })
  .meta({ id: 'Run' });
export type Run = z.infer<typeof Run>;

export const RunParams = z.strictObject({ runId: z.uuid() });
export const RunQuery = z.strictObject({ modelId: z.uuid().optional(), active: z.enum(['true', 'false']).optional() });
export const RunList = z.object({ runs: z.array(Run) }).meta({ id: 'RunList' });

/** The data of one server-sent event named `run`: the whole state, so that a missed event is made good by the next. */
export const RunEvent = z
  .object({
    runId: z.uuid(),
    kind: z.string(),
    state: RunState,
    phase: z.string().nullable(),
    share: z.number().nullable(),
    attempt: z.int(),
    modelId: z.uuid().nullable(),
    entity: z.string().nullable(),
    entityId: z.string().nullable(),
    problem: ProblemItem.nullable(),
    at: z.string(),
  })
  .meta({ id: 'RunEvent' });
export type RunEvent = z.infer<typeof RunEvent>;
