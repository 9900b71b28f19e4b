import { readingNames } from '@tallystone/contracts/fits/outcome-readings';
import type { Refit } from '@tallystone/contracts/fits/outcome-refits';
import type { SensitivityCase } from '@tallystone/contracts/samples/definition';
import { isByRule, listed, outcomeColumns, outcomeWords } from '@tallystone/contracts/specification/outcome';
import type { Writer } from '../page/writer';
import { area, fixed, percent, plural, rate, timeText, whole } from '../number-texts';
import { isCovered, partitionLabel, partitions } from './wording';

/** 5 Outcome and windows. */
export function writeOutcome(writer: Writer): void {
  const { input } = writer;
  const { outcome, declined } = input.specification;
  const words = outcomeWords(outcome);
  writer.beginSection('5', 'Outcome and windows');
  writer.facts([
    [isByRule(outcome) ? 'Outcome by rule on' : 'Outcome column', outcomeColumns(outcome).join(', ')],
    ['Good', words.good],
    ['Bad', words.bad],
    ['Indeterminate', words.indeterminate],
    [isByRule(outcome) ? 'Excluded' : 'Excluded values', words.excluded],
    [
      'Declined',
      declined === null
        ? 'no decision column is stated'
        : `${declined.column} = ${listed(declined.values)}; inference: ${declined.method}`,
    ],
    ['Performance window', input.windows?.performanceMonths == null ? '' : plural(input.windows.performanceMonths, 'month')],
  ]);
  const visible = partitions.filter((name) => !isCovered(input, name)).map((name) => input.result.counts[name]);
  const goods = visible.reduce((sum, entry) => sum + entry.goods, 0);
  const bads = visible.reduce((sum, entry) => sum + entry.bads, 0);
  const open = visible.reduce((sum, entry) => sum + entry.indeterminates, 0);
  writer.table(
    'Outcome of the rows in the sample',
    input.resultEvidence,
    {
      columns: [
        { title: 'Outcome', grow: 1 },
        { title: 'Rows', align: 'right' },
        { title: 'Share', align: 'right' },
      ],
      rows: [
        { cells: ['Good', whole(goods), rate(goods, goods + bads + open)] },
        { cells: ['Bad', whole(bads), rate(bads, goods + bads + open)] },
        { cells: ['Indeterminate', whole(open), rate(open, goods + bads + open)] },
        { cells: ['All', whole(goods + bads + open), '100.0\u202f%'], tone: 'strong' },
      ],
    },
    `Bad rate among goods and bads ${rate(bads, goods + bads)}; indeterminates ${rate(open, goods + bads + open)}${input.outOfTime.covered ? '; out-of-time rows stay covered and are not counted' : ''}.`,
  );
  writer.note('Indeterminates are usually at most 10 to 15 % of the rows (common practice).');
  if (input.result.counts.declined > 0) {
    writer.text(
      `${plural(input.result.counts.declined, 'declined application')} ${writer.cite(input.resultEvidence)}: their outcome is not known. ` +
        (declined?.method === 'none' || declined === null
          ? 'They take no part in the fit.'
          : 'They enter the fit by inference; the assumptions of the inference cannot be tested on accepted applications (Hand and Henley 1993; Crook and Banasik 2004, both from memory). No performance figure uses an inferred outcome.'),
    );
  }
  writeByRule(writer);
  writeReadings(writer);
  writeRefits(writer);
  writeWindows(writer);
  writer.authorTexts(5, ['Justification']);
}

/** What each part of a rule on days past due takes, in the order it is asked. */
function writeByRule(writer: Writer): void {
  const { outcome } = writer.input.specification;
  if (!isByRule(outcome)) return;
  const { outcomeCounts } = writer.input;
  const counts = outcomeCounts?.byRule ?? null;
  if (outcomeCounts === null || counts === null) {
    writer.notEvidenced('Rows by part of the rule');
    return;
  }
  const words = outcomeWords(outcome);
  const { daysPastDue: days, monthsOnBook: months } = outcome;
  const parts: [string, string, number][] = [
    ...(months === null
      ? []
      : [['Excluded', `${months.column} below ${months.least}`, counts.tooFewMonths] as [string, string, number]]),
    ...(days.missing === 'excluded' ? [['Excluded', 'missing', counts.missing] as [string, string, number]] : []),
    ['Bad', words.bad, counts.bads],
    ...(days.indeterminate === null
      ? []
      : [['Indeterminate', words.indeterminate, counts.indeterminates] as [string, string, number]]),
    ['Good', words.good, counts.goods],
  ];
  writer.table(
    'What each part of the rule takes',
    outcomeCounts.evidence,
    {
      columns: [{ title: 'Outcome' }, { title: 'Rule', grow: 1 }, { title: 'Rows', align: 'right' }],
      rows: parts.map(([name, rule, rows]) => ({ cells: [name, rule, whole(rows)] })),
    },
    'Rows left after the exclusions; goods, bads and indeterminates without out-of-time.',
  );
}

/** How far the indeterminates can move the bad rate. */
function writeReadings(writer: Writer): void {
  const { outcomeCounts } = writer.input;
  const readings = outcomeCounts?.readings ?? null;
  writer.heading('Sensitivity to the outcome definition');
  if (outcomeCounts === null || readings === null) {
    writer.notEvidenced('Bad rate with indeterminates as good and as bad');
    return;
  }
  if (readings.length === 0) {
    writer.text(`No row is indeterminate: the outcome has no other reading ${writer.cite(outcomeCounts.evidence)}.`);
    return;
  }
  const rateOf = (wanted: SensitivityCase['indeterminates']): string =>
    percent(readings.find(({ indeterminates }) => indeterminates === wanted)?.development.badRate);
  writer.table(
    'Outcome with the indeterminates read otherwise',
    outcomeCounts.evidence,
    {
      columns: [
        { title: 'Indeterminates', grow: 1 },
        ...Array.from({ length: 2 }, () => [
          { title: 'Goods', align: 'right' as const },
          { title: 'Bads', align: 'right' as const },
          { title: 'Bad rate', align: 'right' as const },
        ]).flat(),
      ],
      spans: [
        { title: '', columns: 1 },
        { title: 'Development', columns: 3 },
        { title: 'Hold-out', columns: 3 },
      ],
      rows: readings.map(({ indeterminates, development, holdOut }) => ({
        cells: [
          readingNames[indeterminates],
          ...[development, holdOut].flatMap(({ goods, bads, badRate }) => [whole(goods), whole(bads), percent(badRate)]),
        ],
      })),
    },
    `The bad rate of development is ${rateOf('as they are')}; it would be ${rateOf('as good')} with every indeterminate good and ${rateOf('as bad')} with every one bad.`,
  );
  writer.note('The whole definition carried out again, the partition drawn again with it. Out-of-time is not counted here.');
}

/** The fit again on other outcomes. */
function writeRefits(writer: Writer): void {
  const { sensitivity, outcomeCounts } = writer.input;
  if (sensitivity === null) {
    writer.notEvidenced('Fit repeated with indeterminates as good and as bad');
    return;
  }
  const { cases, approvalRate } = sensitivity;
  if (cases.length === 0) {
    // Where none is indeterminate at all, that was said already.
    if (outcomeCounts?.readings?.length !== 0) writer.text(`No row of development is indeterminate: the fit has no other reading ${writer.cite(sensitivity.evidence)}.`);
    return;
  }
  const change = (gini: number): string => `${gini > cases[0].gini ? '+' : ''}${area(gini - cases[0].gini)}`;
  const of = (wanted: Refit['indeterminates']): string => change(cases.find(({ indeterminates }) => indeterminates === wanted)?.gini ?? NaN);
  const where = sensitivity.partition === 'holdOut' ? 'the hold-out' : 'development';
  writer.table(
    'The fit repeated with the indeterminates of development read otherwise',
    sensitivity.evidence,
    {
      columns: [
        { title: 'Indeterminates', grow: 1 },
        { title: 'Goods', align: 'right' },
        { title: 'Bads', align: 'right' },
        { title: 'Kept', align: 'right' },
        { title: 'Gini', align: 'right' },
        { title: 'Change', align: 'right' },
        { title: 'Rank correlation', align: 'right' },
        { title: 'Decisions changed', align: 'right' },
      ],
      rows: cases.map((entry) => ({
        cells: [
          readingNames[entry.indeterminates] + (entry.converged ? '' : ' (not converged)'),
          whole(entry.goods),
          whole(entry.bads),
          whole(entry.kept),
          area(entry.gini),
          entry.indeterminates === 'as they are' ? '–' : change(entry.gini),
          fixed(entry.rankCorrelation, 3),
          percent(entry.decisionsChanged),
        ],
      })),
    },
    `On the ${whole(sensitivity.rows)} goods and bads of ${where} the Gini moves by ${of('as good')} with every indeterminate good and by ${of('as bad')} with every one bad.`,
  );
  writer.note(
    `Bins, partition and penalty are held; WOE and coefficients are made anew. Rank correlation: Spearman, with the scores of the fit as defined. ` +
      (approvalRate === null ? 'Decisions are not compared: no cut-off is stated.' : `Decisions at the same approval rate, ${percent(approvalRate)}.`),
  );
}

function writeWindows(writer: Writer): void {
  writer.heading('Windows');
  const { windows } = writer.input;
  if (windows === null) writer.notEvidenced('Dates of application by partition');
  else {
    writer.table('Dates of application by partition', windows.evidence, {
      columns: [{ title: 'Partition', grow: 1 }, { title: 'First' }, { title: 'Last' }],
      rows: partitions.map((name) => {
        const span = windows[name];
        return {
          cells: [partitionLabel[name], span === null ? '–' : timeText(span.from), span === null ? '–' : timeText(span.to)],
        };
      }),
    });
  }
}
