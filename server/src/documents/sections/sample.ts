import { fewestInSegment } from '@tallystone/contracts/comparison/schema';
import type { BalanceReading } from '@tallystone/contracts/samples/balance';
import {
  balanceFinding,
  byIndex,
  comparedWords,
  largerReading,
  readingWords,
} from '@tallystone/contracts/samples/balance-reading';
import { rateInterval } from '@tallystone/numeric/metrics/intervals';
import type { Balance, Segment } from '../input';
import { area, fixed, percent, rate, whole } from '../number-texts';
import type { Writer } from '../page/writer';
import { writeCorrection, writeDeclined } from './inference';
import { isCovered, partitionLabel, partitions } from './wording';

/** 7 Sample, weights, reject inference. */
export function writeSample(writer: Writer): void {
  writer.beginSection('7', 'Sample, weights, reject inference');
  writePartitions(writer);
  writeBalance(writer);
  writeSegments(writer);
  writeCorrection(writer);
  writeDeclined(writer);
}

function writePartitions(writer: Writer): void {
  const { input } = writer;
  const { counts } = input.result;
  const { partition, weight } = input.specification;
  writer.heading('Partitions and weights');
  writer.text(
    'seed' in partition
      ? `${partition.groups === undefined ? 'Goods and bads were split separately' : 'Whole groups were drawn'} with seed ${partition.seed}; a share of ${percent(partition.holdOutShare)} became hold-out. ` +
          (partition.groups === undefined ? '' : `Rows of one ${partition.groups} were kept together. `) +
          (partition.outOfTime === null
            ? 'No out-of-time period is stated.'
            : `Out-of-time: ${partition.outOfTime.column} from ${partition.outOfTime.from ?? 'the beginning'} to ${partition.outOfTime.to ?? 'the end'}.`)
      : `The column ${partition.column} states the partition of each row.`,
  );
  writer.table(
    'Rows by partition',
    input.resultEvidence,
    {
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
    },
    weight === null
      ? 'No weights are stated: every row counts once.'
      : `Goods and bads count by the weights of the column ${weight.column}; their sums stand at the right.`,
  );
}

/** Inputs alone: covered out-of-time rows are compared as well, as on screen. */
function writeBalance(writer: Writer): void {
  const { balance } = writer.input;
  writer.heading('Balance of the partition');
  if (balance === null) {
    writer.notEvidenced('Stability index by characteristic between the partitions');
    return;
  }
  const cells = (reading: BalanceReading | null): string[] => [
    fixed(reading?.index, 3),
    fixed(reading?.criticalValue, 3),
    readingWords(reading),
  ];
  writer.table(
    'Stability index by characteristic, against development',
    balance.evidence,
    {
      columns: [
        { title: 'Characteristic', grow: 2 },
        { title: 'Index', align: 'right' },
        { title: 'Chance', align: 'right' },
        { title: 'Reading', grow: 1 },
        { title: 'Index', align: 'right' },
        { title: 'Chance', align: 'right' },
        { title: 'Reading', grow: 1 },
        { title: 'Moved most', grow: 2 },
      ],
      spans: [
        { title: '', columns: 1 },
        { title: 'Hold-out', columns: 3 },
        { title: 'Out-of-time', columns: 3 },
      ],
      rows: byIndex(balance.characteristics).map((entry) => {
        const largest = largerReading(entry)?.largest;
        return {
          cells: [
            writer.labelWithUnit(entry.column),
            ...cells(entry.holdOut),
            ...cells(entry.outOfTime),
            largest ? `${largest.label}: ${percent(largest.compared)} against ${percent(largest.development)}` : '–',
          ],
        };
      }),
    },
    balanceFinding(balance.characteristics, (column) => writer.label(column)),
  );
  writer.note(
    'Inputs only: no outcome enters. Rows with a good or bad outcome; tenths of development, each special code and missing in a class of its own. Usual reading of the index: below 0.10, to 0.25, above (common practice). “Chance”: when nothing has changed the index is (1/N + 1/M) times a chi-square with B − 1 degrees of freedom, N and M the rows and B the classes, and stays below this value in 95 of 100 draws (Yurdakul 2018).',
  );
  writeCompared(writer, balance);
}

/** Who compares many seeds and keeps one has chosen by what he saw: all of them stand here. */
function writeCompared(writer: Writer, { compared, evidence }: Balance): void {
  if (compared === null) return;
  writer.text(`${comparedWords(compared)} ${writer.cite(evidence)}.`);
}

function writeSegments(writer: Writer): void {
  const { segments } = writer.input;
  writer.heading('Segments');
  if (segments === null) {
    writer.notEvidenced('What segments split');
    return;
  }
  if (segments.columns.length === 0) writer.text(`No column has the role of a segment ${writer.cite(segments.evidence)}.`);
  for (const segment of segments.columns) writeSegment(writer, segment, segments.evidence);
}

const readable = (goods: number, bads: number): boolean => Math.min(goods, bads) >= fewestInSegment;

function writeSegment(writer: Writer, { column, protected: barred, groups, holdOut }: Segment, evidence: string | null): void {
  const name = writer.label(column);
  if (barred) {
    writer.text(
      `${name} is protected: what it splits is not printed here, and belongs to a fairness review ${writer.cite(evidence)}.`,
    );
    return;
  }
  const read = groups
    .filter(({ goods, bads }) => readable(goods, bads))
    .map(({ label, goods, bads }) => ({ label, share: bads / (goods + bads) }))
    .sort((first, second) => first.share - second.share);
  const figures = new Map(holdOut?.values.map((entry) => [entry.value, entry]));
  writer.table(
    `Segments by ${name}`,
    [evidence, holdOut?.evidence].filter(Boolean).join(', ') || null,
    {
      columns: [
        { title: name, grow: 1 },
        { title: 'Rows', align: 'right' },
        { title: 'Goods', align: 'right' },
        { title: 'Bads', align: 'right' },
        { title: 'Bad rate', align: 'right' },
        { title: '95 % interval', align: 'right' },
        { title: 'Rows', align: 'right' },
        { title: 'Bads', align: 'right' },
        { title: 'AUC', align: 'right' },
      ],
      spans: [
        { title: '', columns: 1 },
        { title: 'File; no outcome of out-of-time', columns: 5 },
        { title: 'Hold-out, this version', columns: 3 },
      ],
      rows: groups.map(({ label, rows, goods, bads }) => {
        const shown = readable(goods, bads);
        const interval = shown ? rateInterval(bads, goods + bads) : null;
        const at = figures.get(label);
        return {
          cells: [
            label,
            whole(rows),
            shown ? whole(goods) : 'few',
            shown ? whole(bads) : 'few',
            shown ? rate(bads, goods + bads) : 'few',
            interval === null ? '–' : `${percent(interval.lower)} to ${percent(interval.upper)}`,
            whole(at?.rows),
            at === undefined ? '–' : at.bads === null ? 'few' : whole(at.bads),
            area(at?.auc),
          ],
        };
      }),
    },
    read.length < 2
      ? 'Too few segments have enough goods and bads to be held against each other.'
      : `The bad rate runs from ${percent(read[0].share)} (${read[0].label}) to ${percent(read[read.length - 1].share)} (${read[read.length - 1].label}).`,
  );
  if (holdOut === null) writer.notEvidenced(`Hold-out figures by ${name}`);
  writer.note(
    `Wilson’s interval. With fewer than ${whole(fewestInSegment)} goods or bads a segment is counted and not read (“few”).`,
  );
}
