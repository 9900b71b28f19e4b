import { z } from 'zod';

/** What the dictionary says of one column beside its role and its special codes, which stand in the definition. */
export const DictionaryEntry = z.strictObject({
  column: z.string().min(1).max(1000),
  /** As people call it, on screens and in documents; empty = by its heading. */
  label: z.string().trim().max(120),
  unit: z.string().trim().max(40),
  description: z.string().trim().max(2000),
  /** What is done about a special code, beside the bin of its own that each has. */
  treatments: z.array(z.strictObject({ code: z.string().max(1000), treatment: z.string().trim().max(200) })).max(100),
});
export type DictionaryEntry = z.infer<typeof DictionaryEntry>;

export const DictionaryContent = z.strictObject({ entries: z.array(DictionaryEntry).max(200) });
export type DictionaryContent = z.infer<typeof DictionaryContent>;

const Lost = z.array(z.object({ what: z.string(), why: z.string() }));

/** What was taken over from an earlier sample of the model when this one was read. */
export const CarriedDictionary = z.object({
  sampleId: z.uuid(),
  fileName: z.string(),
  /** Columns of the same name and kind. */
  columns: z.array(z.string()),
  notCarried: z.array(z.object({ column: z.string(), why: z.string() })),
  /** The file of a later sample that nobody has defined yet, where labels, units and descriptions are from that one. */
  wordsFrom: z.string().nullable(),
  /**
   * What the definition of that sample says of the values of the outcome, the decision and the partition, and of codes: what was taken over, and
   * what could not be. Left out without a definition, and where a sample was read before this was carried over.
   */
  definition: z.object({ carried: z.array(z.enum(['outcome', 'declined', 'partition'])), lost: Lost }).optional(),
});
export type CarriedDictionary = z.infer<typeof CarriedDictionary>;

/** What became of the draft when the file was read again. */
export const KeptDraft = z.object({
  /** Columns that stayed as they were. */
  columns: z.array(z.string()),
  /** What could not stay, a column or a rule, with the reason. */
  lost: Lost,
});
export type KeptDraft = z.infer<typeof KeptDraft>;

export const Dictionary = z
  .object({
    entries: z.array(DictionaryEntry),
    /** Counts saves; the ETag. 0 before anything was written. */
    revision: z.int(),
    savedAt: z.string().nullable(),
    savedBy: z.string().nullable(),
    carried: CarriedDictionary.nullable(),
    /** Null unless the file was read again. */
    readAgain: KeptDraft.nullable(),
    abilities: z.array(z.enum(['edit'])),
  })
  .meta({ id: 'SampleDictionary' });
export type Dictionary = z.infer<typeof Dictionary>;

/** Headings of the file, in the order of an export. A file may leave out any but "column". */
export const dictionaryHeadings = [
  'column',
  'kind',
  'role',
  'label',
  'unit',
  'description',
  'code',
  'meaning',
  'treatment',
] as const;

export const DictionaryFile = z.strictObject({ text: z.string().max(2_000_000) });

/** How columns are called where characteristics are named; those without a label or unit are left out. */
export const ColumnLabels = z
  .object({ labels: z.array(z.object({ column: z.string(), label: z.string(), unit: z.string() })) })
  .meta({ id: 'ColumnLabels' });
export type ColumnLabels = z.infer<typeof ColumnLabels>;
