import type { Writer } from '../page/writer';
import { percent, plural, whole } from '../number-texts';
import { colour } from '../tokens';
import { partitions } from './wording';

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
  writer.authorTexts(4, ['Rationale']);
}
