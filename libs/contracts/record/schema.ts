import { z } from 'zod';
import { Role } from '../people/schema';

/** One act. `sequence` orders them by the database's own count, never by a clock. */
export const RecordEntry = z
  .object({
    sequence: z.int(),
    at: z.string(),
    actorId: z.uuid().nullable(),
    actorName: z.string(),
    actorRoles: z.array(Role),
    action: z.string(),
    entity: z.string(),
    entityId: z.string().nullable(),
    modelId: z.uuid().nullable(),
    before: z.unknown(),
    after: z.unknown(),
    detail: z.unknown(),
    reason: z.string().nullable(),
    /** True when the reader may know that it happened but not what it says. */
    withheld: z.boolean(),
    hash: z.string(),
  })
  .meta({ id: 'RecordEntry' });
export type RecordEntry = z.infer<typeof RecordEntry>;

export const RecordQuery = z.strictObject({
  action: z.string().max(100).optional(),
  entity: z.string().max(100).optional(),
  entityId: z.string().max(100).optional(),
  modelId: z.uuid().optional(),
  actorId: z.uuid().optional(),
  from: z.iso.datetime({ offset: true }).optional(),
  to: z.iso.datetime({ offset: true }).optional(),
  /** Entries before this sequence: the page after the one that ended there. */
  before: z.coerce.number().int().positive().optional(),
  limit: z.coerce.number().int().min(1).max(200).default(50),
});
export type RecordQuery = z.output<typeof RecordQuery>;

export const RecordPage = z.object({ entries: z.array(RecordEntry), next: z.int().nullable() }).meta({ id: 'RecordPage' });

/** The last link of the chain: printed in documents and logged, so that a cut tail shows. */
export const RecordHead = z.object({ sequence: z.int(), hash: z.string() }).meta({ id: 'RecordHead' });
export type RecordHead = z.infer<typeof RecordHead>;

/** What a verification run ends with; at most the first hundred faults are listed. */
export const RecordVerification = z
  .object({
    rows: z.int(),
    intact: z.boolean(),
    faultCount: z.int(),
    faults: z.array(
      z.object({ sequence: z.int(), kind: z.enum(['altered', 'dropped', 'reordered', 'cut']), message: z.string() }),
    ),
    head: RecordHead,
  })
  .meta({ id: 'RecordVerification' });
export type RecordVerification = z.infer<typeof RecordVerification>;
