import type { ColumnList, ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { DefinitionCounts, DraftOutcomeRule, RuleCounts, WaterfallStep } from '@tallystone/contracts/samples/definition';
import type { Preview } from '@tallystone/contracts/samples/reading';
import type { SampleList } from '@tallystone/contracts/samples/schema';
import { count, plural, share, significant, written } from '../../../ui/numbers';

/** One sentence for the top of each page, by rules; where none fires, the counts. */
export function samplesFinding({ samples, uploads }: SampleList): string {
  if (samples.length === 0) {
    return uploads.length > 0
      ? 'A file has arrived in part: choose it again and it goes on from there.'
      : 'A CSV of past applicants with their outcome starts the work.';
  }
  const erased = samples.filter((sample) => sample.erased !== null).length;
  if (erased === samples.length)
    return `The rows of ${erased === 1 ? 'the sample' : `all ${count(erased)} samples`} were erased; what was counted stays.`;
  const defined = samples.filter(({ definitions }) => definitions > 0).length;
  const waiting = samples.filter((sample) => sample.state === 'received' && sample.erased === null).length;
  if (waiting > 0)
    return `${plural(waiting, 'file')} of ${count(samples.length)} wait${waiting === 1 ? 's' : ''} for reading choices.`;
  if (defined === 0) return `${plural(samples.length, 'sample')}, none defined yet: say what is good and bad, and confirm.`;
  if (samples.length === 1) return '1 sample, with a confirmed definition.';
  return `${plural(samples.length, 'sample')}, ${count(defined)} of them with a confirmed definition.`;
}

export function readingFinding(preview: Preview): string {
  const part = preview.looked.whole
    ? `All ${count(preview.looked.records)} rows`
    : `The first ${count(preview.looked.records)} rows`;
  if (preview.problems.length > 0) return `${plural(preview.problems.length, 'problem')} to settle before the file can be read.`;
  const columns = plural(preview.header.length, 'column');
  if (preview.warnings.length > 0)
    return `${part} have ${columns} each; ${plural(preview.warnings.length, 'column deserves', 'columns deserve')} a look.`;
  return `${part} have ${columns} each, and nothing speaks against these choices.`;
}

/** Four significant digits and no zeros after them: 0.5, 95, 1 250. */
export function plain(value: number): string {
  const text = significant(value, 4);
  return text.includes('.') && !text.includes('e')
    ? text.replace(/\.?0+$/, '')
    : Number.isInteger(value) && Math.abs(value) < 1e9
      ? count(value)
      : text;
}

/** "18 to 77, median 41": what a quality table has room for. */
export function rangeOf(profile: ColumnProfile): string {
  const { numeric, date } = profile;
  if (numeric) {
    const write = plain;
    return `${write(numeric.smallest)} to ${write(numeric.largest)}`;
  }
  // U+2011: a day does not break in the middle.
  if (date) return `${date.first} to ${date.last}`.replaceAll('-', '\u2011');
  return '';
}

export function mostFrequentOf(profile: ColumnProfile): string {
  const [first] = profile.mostFrequent;
  if (profile.hashed) return 'kept as hashes';
  if (!first && profile.flags.some(({ code }) => code === 'holds-personal-data')) return 'not listed';
  return first
    ? `${profile.kind === 'numeric' ? written(first.value) : first.value} (${share(first.count / Math.max(1, profile.rows - profile.missing), 0)})`
    : '';
}

/** Columns that nobody has looked at and that deserve it, for the notice on top. */
export const flagged = (list: ColumnList): number =>
  list.columns.filter(({ flags }) => flags.some(({ weight }) => weight !== 'note')).length;

export function badRateOut(step: WaterfallStep): number | null {
  if (step.outGoods === null || step.outBads === null || step.outGoods + step.outBads === 0) return null;
  return step.outBads / (step.outGoods + step.outBads);
}

/** Of the rows that are left after a step, as far as their outcome is told. */
export function badRateLeft({ leftGoods = 0, leftBads = 0 }: WaterfallStep): number | null {
  return leftGoods + leftBads === 0 ? null : leftBads / (leftGoods + leftBads);
}

/** Whose outcome the bad rates count. */
export function waterfallNote({ partitions }: DefinitionCounts): string {
  return partitions.outOfTime.covered && partitions.outOfTime.rows > 0
    ? 'bad rates without out-of-time, which is covered'
    : 'bad rates of goods and bads, unweighted';
}

/** The step that takes out most of the rows, for the figure under the page's own sentence. */
export function waterfallFinding({ waterfall }: DefinitionCounts): string {
  const steps = waterfall.filter(
    ({ kind, out }) => out > 0 && (kind === 'exclusion' || kind === 'outcome' || kind === 'declined'),
  );
  const [most] = [...steps].sort((a, b) => b.out - a.out);
  if (!most) return 'No row is left out: every row is in one of the partitions.';
  const all = steps.reduce((sum, { out }) => sum + out, 0);
  return `${plural(all, 'row')} ${all === 1 ? 'takes' : 'take'} no part, most by “${most.label}” (${count(most.out)}).`;
}

const flagWords: Partial<Record<ColumnProfile['flags'][number]['code'], string>> = {
  'special-code-suspected': 'special codes?',
  'looks-like-identifier': 'identifier',
  'looks-like-email': 'e-mail',
  'looks-like-name': 'names',
  'looks-like-protected': 'protected?',
  'holds-personal-data': 'personal data',
  'possible-leakage': 'leakage?',
  'repeated-identifiers': 'repeated',
  'near-duplicate-identifiers': 'near-duplicates',
  'like-categories': 'written alike?',
  'unreadable-numbers': 'no numbers',
  'numbers-as-text': 'numbers as text',
  'mixed-numbers': 'mixed numbers',
  'ambiguous-numbers': 'thousands?',
  'doubtful-dates': 'dates?',
};

/** The flags in a word each; the sentences stand beside the column. */
export const flagsOf = (profile: ColumnProfile): string =>
  profile.flags.map(({ code }) => flagWords[code] ?? code.replaceAll('-', ' ')).join(', ');

export function countsFinding(counts: DefinitionCounts): string {
  const source = counts.waterfall[0]?.left ?? 0;
  const { development, holdOut, outOfTime } = counts.partitions;
  const rate = development.badRate === null ? '' : `, ${count(development.bads)} of them bad (${share(development.badRate)})`;
  const rest = [
    holdOut.rows > 0 ? `${count(holdOut.rows)} hold-out` : '',
    outOfTime.rows > 0 ? `${count(outOfTime.rows)} out-of-time` : '',
  ].filter(Boolean);
  return `${count(development.rows)} of ${count(source)} rows are development${rate}${rest.length > 0 ? `; ${rest.join(' and ')}` : ''}.`;
}

/** What the indeterminates can make of the bad rate of development, from all of them good to all of them bad. */
export function sensitivityFinding({ sensitivity, partitions }: DefinitionCounts): string {
  const rate = (reading: string): number | null =>
    sensitivity?.find(({ indeterminates }) => indeterminates === reading)?.development.badRate ?? null;
  const { indeterminates, rows } = partitions.development;
  const part = rows === 0 ? '' : `, ${share(indeterminates / rows)} of development`;
  return `The bad rate of development is ${share(rate('as they are'))}; it would be ${share(rate('as good'))} with every indeterminate good and ${share(rate('as bad'))} with every one bad (${plural(indeterminates, 'row')}${part}).`;
}

/** One part of an outcome by rule; `rows` null while they are not counted. */
export interface RulePart {
  readonly key: string;
  readonly label: string;
  readonly means: string;
  readonly rows: number | null;
}

/** The parts of an outcome by rule in the order they are asked: whoever is excluded is not looked at further. */
export function ruleParts(rule: DraftOutcomeRule, days: string, counts: RuleCounts | null): RulePart[] {
  const { bad, indeterminate, monthsOnBook, missing } = rule;
  const part = (key: string, label: string, means: string, rows: number | undefined): RulePart => ({
    key,
    label,
    means,
    rows: rows ?? null,
  });
  return [
    ...(monthsOnBook
      ? [part('months', 'Excluded', `${monthsOnBook.column} below ${plain(monthsOnBook.least)}`, counts?.tooFewMonths)]
      : []),
    ...(missing === 'excluded' ? [part('missing', 'Excluded', 'missing', counts?.missing)] : []),
    part('bad', 'Bad', `${days} of ${plain(bad)} or more`, counts?.bads),
    ...(indeterminate === null
      ? []
      : [
          part(
            'indeterminate',
            'Indeterminate',
            `${days} from ${plain(indeterminate)} to below ${plain(bad)}`,
            counts?.indeterminates,
          ),
        ]),
    part('good', 'Good', `${days} below ${plain(indeterminate ?? bad)}`, counts?.goods),
  ];
}
