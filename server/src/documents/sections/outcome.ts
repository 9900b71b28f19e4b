import { isByRule, listed, outcomeColumns, outcomeWords } from '@tallystone/contracts/specification/outcome';
import type { Writer } from '../page/writer';
import { area, fixed, plural, rate, whole } from '../number-texts';
import { isCovered, partitions } from './wording';

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
  const { sensitivity } = input;
  writer.heading('Sensitivity to the outcome definition');
  if (sensitivity === null) writer.notEvidenced('Fit repeated with indeterminates as good and as bad');
  else {
    writer.table('The fit with other outcome definitions', sensitivity.evidence, {
      columns: [
        { title: 'Definition', grow: 1 },
        { title: 'Goods', align: 'right' },
        { title: 'Bads', align: 'right' },
        { title: 'Kept', align: 'right' },
        { title: 'Gini', align: 'right' },
        { title: 'Rank correlation', align: 'right' },
      ],
      rows: sensitivity.cases.map((entry) => ({
        cells: [
          entry.label,
          whole(entry.goods),
          whole(entry.bads),
          whole(entry.kept),
          area(entry.gini),
          fixed(entry.rankCorrelation, 3),
        ],
      })),
    });
  }
  writer.authorTexts(5, ['Justification']);
}
