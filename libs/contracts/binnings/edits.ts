import { z } from 'zod';
import { Bins } from './bins';

/** What a person can do to bins by hand. "kept own": own bins were kept over those that somebody else had saved meanwhile. */
export const editKinds = [
  'cut moved',
  'cut added',
  'bins merged',
  'bin split',
  'categories grouped',
  'category set apart',
  'special moved',
  'missing moved',
  'unseen moved',
  'kept own',
] as const;
export const EditKind = z.enum(editKinds);
export type EditKind = z.infer<typeof EditKind>;

/** The short list of reasons; "other" needs words. */
export const editReasons = [
  'trend known from experience',
  'holds better in hold-out',
  'bin too small',
  'limit used in policy',
  'round number',
  'categories alike',
  'quality of the data',
  'other',
] as const;

export const EditReason = z
  .strictObject({ code: z.enum(editReasons), text: z.string().trim().max(1000).default('') })
  .refine((reason) => reason.code !== 'other' || reason.text.length > 0, { path: ['text'], message: 'Say why in a few words' });
export type EditReason = z.infer<typeof EditReason>;

/** One edit as it is sent. The id is made by the client, so that a save that is sent twice counts once. */
export const SentEdit = z.strictObject({
  id: z.uuid(),
  kind: EditKind,
  /** One sentence: "Cut moved from 30 to 32". */
  what: z.string().trim().min(1).max(500),
  before: Bins,
  after: Bins,
  reason: EditReason.nullable(),
});
export type SentEdit = z.infer<typeof SentEdit>;

export const Edit = z
  .object({
    ...SentEdit.shape,
    by: z.string(),
    at: z.string(),
    /** False once it was undone or the characteristic was classed anew. */
    inEffect: z.boolean(),
    /** Made on the bins of an earlier binning, and carried over when this one was classed. */
    carriedFrom: z.object({ binning: z.string(), by: z.string(), at: z.string() }).nullable(),
    /** Why an edit of the earlier binning makes no sense here; null for one that does. Before and after are the earlier bins. */
    notCarried: z.string().nullable(),
  })
  .meta({ id: 'BinningEdit' });
export type Edit = z.infer<typeof Edit>;
