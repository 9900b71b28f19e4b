import type { Writer } from '../page/writer';
import { fixed, percent, plural, rate, timeText, whole } from '../number-texts';
import { colour } from '../tokens';
import { isCovered, partitionLabel, partitions } from './wording';

/** 4 Population and exclusions. */
export function writePopulation(writer: Writer): void {
  const { input } = writer;
  const { waterfall, result } = input;
  writer.beginSection('4', 'Population and exclusions');
  writer.text(
    `Population: ${input.model.population}. Exclusions use only what is known at application; a row counts at the first rule that takes it out.`,
  );
  if (waterfall === null) writer.notEvidenced('Waterfall from the rows of the file to the rows of the sample');
  else {
    const used = partitions.reduce((sum, partition) => sum + result.counts[partition].rows, 0);
    let left = waterfall.sourceRows;
    const remaining: number[] = [left];
    const rows = [{ cells: ['Rows of the file', '', '', whole(left), '100.0\u202f%'] }];
    for (const step of waterfall.steps) {
      left -= step.rows;
      remaining.push(left);
      rows.push({
        cells: [
          step.reason,
          whole(step.rows),
          step.bads === null ? 'not known' : whole(step.bads),
          whole(left),
          percent(left / Math.max(1, waterfall.sourceRows)),
        ],
      });
    }
    remaining.push(used);
    const reconciles = left === used;
    writer.table(
      'Waterfall of exclusions',
      waterfall.evidence,
      {
        columns: [
          { title: 'Step', grow: 1 },
          { title: 'Taken out', align: 'right' },
          { title: 'Bads among them', align: 'right' },
          { title: 'Rows left', align: 'right' },
          { title: 'Share', align: 'right' },
        ],
        rows: [
          ...rows,
          {
            cells: [
              'Development, hold-out and out-of-time',
              '',
              '',
              whole(used),
              percent(used / Math.max(1, waterfall.sourceRows)),
            ],
            tone: 'strong' as const,
          },
        ],
        drawing: {
          title: '',
          width: 90,
          row: (index, box) => {
            const part = remaining[index] / Math.max(1, waterfall.sourceRows);
            writer.sheet.doc
              .rect(box.x, box.y + box.height / 2 - 3, box.width * Math.max(0, part), 6)
              .fill(index === remaining.length - 1 ? colour.primary : colour.hairline);
          },
        },
      },
      reconciles
        ? 'The steps reconcile exactly with the rows of the partitions.'
        : `The steps do not reconcile: ${plural(Math.abs(left - used), 'row')} ${left > used ? 'are not accounted for' : 'are counted twice'}.`,
    );
    if (!reconciles) writer.caution('Exclusions that do not reconcile bar a version from being submitted.');
  }
  writePartitions(writer);
  writer.authorTexts(4, ['Rationale']);
}

function writePartitions(writer: Writer): void {
  const { input } = writer;
  const { counts } = input.result;
  writer.heading('Partitions');
  const { partition } = input.specification;
  writer.text(
    'seed' in partition
      ? `${partition.groups === undefined ? 'Goods and bads were split separately' : 'Whole groups were drawn'} with seed ${partition.seed}; a share of ${percent(partition.holdOutShare)} became hold-out. ` +
          (partition.groups === undefined ? '' : `Rows of one ${partition.groups} were kept together. `) +
          (partition.outOfTime === null
            ? 'No out-of-time period is stated.'
            : `Out-of-time: ${partition.outOfTime.column} from ${partition.outOfTime.from ?? 'the beginning'} to ${partition.outOfTime.to ?? 'the end'}.`)
      : `The column ${partition.column} states the partition of each row.`,
  );
  writer.table('Rows by partition', input.resultEvidence, {
    columns: [
      { title: 'Partition', grow: 1 },
      { title: 'Rows', align: 'right' },
      { title: 'Goods', align: 'right' },
      { title: 'Bads', align: 'right' },
      { title: 'Indeterminates', align: 'right' },
      { title: 'Bad rate', align: 'right' },
      { title: 'Weight', align: 'right' },
    ],
    rows: partitions.map((name) => {
      const entry = counts[name];
      const covered = isCovered(input, name);
      return {
        cells: [
          partitionLabel[name],
          whole(entry.rows),
          covered ? 'covered' : whole(entry.goods),
          covered ? 'covered' : whole(entry.bads),
          covered ? 'covered' : whole(entry.indeterminates),
          covered ? 'covered' : rate(entry.bads, entry.goods + entry.bads),
          covered ? 'covered' : fixed(entry.weight, Number.isInteger(entry.weight) ? 0 : 1),
        ],
      };
    }),
  });
  const { windows } = input;
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
