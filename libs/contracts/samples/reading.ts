import { z } from 'zod';
import { ProblemItem } from '../problems/schema';

/** Most characters of one field (UTF-16 code units, as both readers, the preview and replay count them): 1 MB where each is one byte. */
export const mostCellCharacters = 1024 ** 2;

/** Most characters of a heading: definitions and everything after them name columns by it. */
export const mostHeadingCharacters = 1000;

/** How the file is read: `data` of the specification without the fingerprint, which belongs to the file. */
export const ReadingChoices = z
  .strictObject({
    delimiter: z.enum([',', ';', '\t', '|']),
    encoding: z.enum(['utf-8', 'utf-16le', 'utf-16be', 'windows-1252']),
    decimal: z.enum(['.', ',']),
    thousands: z.enum(['.', ',', ' ', '\u00a0', '\u202f', "'"]).nullable(),
    trim: z.boolean(),
    /** Texts that mean "missing" in every column. */
    missing: z.array(z.string().max(100)).max(50),
    /** How dates such as 03/04/2024 are to be read; left out, as in earlier readings: only ISO dates are dates. */
    dateOrder: z.enum(['year-month-day', 'day-month-year', 'month-day-year']).optional(),
    /** Whether dates with a time, and those with the year first that are not written YYYY-MM-DD, are read as their day; left out, as in earlier readings: no. */
    dateTimes: z.enum(['text', 'day']).optional(),
    /** Columns whose texts stay as they are: reference numbers in the form of a date, dates in another order; left out: none. */
    notDates: z.array(z.string().min(1).max(mostHeadingCharacters)).max(200).optional(),
  })
  .meta({ id: 'ReadingChoices' });
export type ReadingChoices = z.infer<typeof ReadingChoices>;

/** What is left out is judged from the file. */
export const PreviewRequest = ReadingChoices.partial();
export type PreviewRequest = z.infer<typeof PreviewRequest>;

export const columnKinds = ['numeric', 'categorical', 'date'] as const;
export const ColumnKind = z.enum(columnKinds);
export type ColumnKind = z.infer<typeof ColumnKind>;

/** Most doubtful lines that are listed; all are counted. */
export const mostDoubtfulLines = 50;

/** A line of the file with what is wrong with it, as it stands there. */
export const DoubtfulLine = z.object({
  line: z.int(),
  /** The data record that the line belongs to; null for a line of the header. */
  record: z.int().nullable(),
  /** Its beginning; what is no character of the encoding is written \xE9, \0 and the like. */
  text: z.string(),
  /** The line goes on. */
  clipped: z.boolean(),
  /** What is wrong with it, a few words each. */
  doubts: z.array(z.string()),
});
export type DoubtfulLine = z.infer<typeof DoubtfulLine>;

/** Lines in which something is wrong: the first of them, and how many there are. */
export const DoubtfulLines = z
  .object({ lines: z.array(DoubtfulLine).max(mostDoubtfulLines), count: z.int() })
  .meta({ id: 'DoubtfulLines' });
export type DoubtfulLines = z.infer<typeof DoubtfulLines>;

/** The first rows as they would be read, with everything that is doubtful, before anything is decided. */
export const Preview = z
  .object({
    /** Without a date order where the file holds dates whose order nothing tells: that is for a person to say. */
    choices: ReadingChoices,
    /** Why each choice was proposed, one sentence each; for what the person chose only what the values say of the date order. */
    reasons: z.array(
      z.object({
        choice: z.enum(['delimiter', 'encoding', 'decimal', 'thousands', 'trim', 'missing', 'dateOrder', 'dateTimes']),
        reason: z.string(),
      }),
    ),
    header: z.array(z.string()),
    rows: z.array(z.object({ record: z.int(), line: z.int(), cells: z.array(z.string()) })),
    columns: z.array(
      z.object({
        column: z.string(),
        kind: ColumnKind,
        /** What speaks against the kind, or null. */
        against: z.string().nullable(),
      }),
    ),
    /** Of the part that was looked at. */
    doubtful: DoubtfulLines,
    /** The whole file has been looked at, or its beginning only. */
    looked: z.object({ records: z.int(), bytes: z.number(), whole: z.boolean() }),
    /** What must be settled before the file can be read. */
    problems: z.array(ProblemItem),
    /** What a careful reader looks at, and may accept. */
    warnings: z.array(ProblemItem),
  })
  .meta({ id: 'Preview' });
export type Preview = z.infer<typeof Preview>;

/** Result of the run "read sample" (Run.result). */
export const ReadingResult = z.object({ rows: z.int(), columns: z.int(), flags: z.int() });
export type ReadingResult = z.infer<typeof ReadingResult>;
/** Phases of that run, in order. */
export const readingPhases = ['receiving', 'reading', 'profiling', 'storing'] as const;
