import { openingWords } from '@tallystone/contracts/out-of-time/opening-words';
import type { ResultMetrics } from '@tallystone/contracts/result/types';
import { rateInterval } from '@tallystone/numeric/metrics/intervals';
import { drawCalibration } from '../charts/calibration';
import { drawScoreDistribution } from '../charts/score-distribution';
import { area, fixed, intervalText, percent, plural, pValue, rate, significant, timeText, whole } from '../number-texts';
import { fromRecord, type Writer } from '../page/writer';
import { aucWithInterval, bandText, byPartition, isCovered, partitionLabel, partitions, stabilityReading } from './wording';

/** 11 Performance. */
export function writePerformance(writer: Writer): void {
  const { input } = writer;
  const { result } = input;
  writer.beginSection('11', 'Performance');
  writeOpenings(writer);
  const hosmer = (entry: ResultMetrics, text: (test: NonNullable<ResultMetrics['hosmerLemeshow']>) => string): string =>
    entry.hosmerLemeshow === null ? '–' : text(entry.hosmerLemeshow);
  const rows: [string, string[]][] = [
    ['AUC', byPartition(input, result.metrics, (entry) => aucWithInterval(entry.auc, entry.aucStandardError).value)],
    [
      '95 % interval (DeLong 1988)',
      byPartition(input, result.metrics, (entry) => aucWithInterval(entry.auc, entry.aucStandardError).interval),
    ],
    ['Gini', byPartition(input, result.metrics, (entry) => area(entry.gini))],
    ['KS', byPartition(input, result.metrics, (entry) => area(entry.ks))],
    ['Brier score', byPartition(input, result.metrics, (entry) => fixed(entry.brier, 4))],
    ['Log loss', byPartition(input, result.metrics, (entry) => fixed(entry.logLoss, 4))],
    ['Calibration in the large (0)', byPartition(input, result.metrics, (entry) => fixed(entry.calibrationInTheLarge, 3))],
    ['Calibration slope (1)', byPartition(input, result.metrics, (entry) => fixed(entry.calibrationSlope, 3))],
    ['Calibration intercept', byPartition(input, result.metrics, (entry) => fixed(entry.calibrationIntercept, 3))],
    [
      'Hosmer-Lemeshow statistic',
      byPartition(input, result.metrics, (entry) => hosmer(entry, (test) => fixed(test.statistic, 2))),
    ],
    [
      'Hosmer-Lemeshow degrees of freedom',
      byPartition(input, result.metrics, (entry) => hosmer(entry, (test) => whole(test.degreesOfFreedom))),
    ],
    ['Hosmer-Lemeshow p-value', byPartition(input, result.metrics, (entry) => hosmer(entry, (test) => pValue(test.pValue)))],
    ['Mean score', byPartition(input, result.metrics, (entry) => fixed(entry.meanScore, 1))],
    [
      'Smallest and largest score',
      byPartition(input, result.metrics, (entry) => intervalText(entry.smallestScore, entry.largestScore, 0)),
    ],
    ['AUC of the rounded score', byPartition(input, result.metrics, (entry) => area(entry.aucRounded))],
  ];
  writer.table(
    'Discrimination and calibration by partition',
    input.resultEvidence,
    {
      columns: [
        { title: 'Measure', grow: 1 },
        ...partitions.map((partition) => ({ title: partitionLabel[partition], align: 'right' as const })),
      ],
      rows: rows.map(([title, cells]) => ({ cells: [title, ...cells] })),
    },
    inWords(writer),
  );
  writer.note(
    'Unweighted, on the unrounded score and known outcomes only. In brackets the value of perfect calibration. In the large: positive means more bads than predicted. Slope below 1 means over-fitted, above 1 over-shrunk, as is to be expected under a strong penalty. Hosmer-Lemeshow detects trivial misfit in large samples and is never the only gate.',
  );

  writeComparisons(writer);
  writeDistributions(writer);
  writeBands(writer);
  writer.authorTexts(11, ['Interpretation', 'Limitations']);
}

function inWords(writer: Writer): string {
  const { input } = writer;
  const { development, holdOut } = input.result.metrics;
  if (development === null || holdOut === null) return 'There are no hold-out figures to set beside development.';
  const fall = development.auc - holdOut.auc;
  const slope = holdOut.calibrationSlope;
  return (
    `Hold-out AUC ${area(holdOut.auc)} against ${area(development.auc)} on development: ${fall >= 0 ? 'a fall' : 'a rise'} of ${area(Math.abs(fall))}.` +
    (slope === null ? '' : ` Calibration slope on hold-out ${fixed(slope, 2)}.`)
  );
}

function writeOpenings(writer: Writer): void {
  const { outOfTime } = writer.input;
  const before = outOfTime.openings.filter((opening) => opening.beforeFreezing);
  writer.text(
    outOfTime.openings.length === 0
      ? 'The out-of-time figures were never opened before freezing.'
      : `Before freezing, the out-of-time figures were ${openingWords(before) ?? 'never opened'}; after it, ${openingWords(outOfTime.openings.filter((opening) => !opening.beforeFreezing)) ?? 'not at all'}. ` +
          'An opening under any definition of the same rows counts.',
  );
  if (outOfTime.covered) writer.caution('Out-of-time figures are covered and are not printed.');
  if (outOfTime.openings.length > 0) {
    writer.table('Openings of the out-of-time figures', fromRecord, {
      columns: [
        { title: 'When' },
        { title: 'Who', grow: 1 },
        { title: 'Why', grow: 3 },
        { title: 'Definition' },
        { title: 'Before freezing' },
        { title: 'Record', align: 'right' },
      ],
      rows: outOfTime.openings.map((opening) => ({
        cells: [
          timeText(opening.at),
          opening.by,
          opening.reason,
          `${opening.definition} of sample ${opening.sample}, ${opening.under === 'this' ? 'this one' : opening.under}`,
          opening.beforeFreezing ? 'yes' : 'no',
          opening.sequence === null ? '–' : `act ${opening.sequence}`,
        ],
      })),
    });
  }
  if (before.length > 1)
    writer.caution(
      'Figures that were looked at more than once before freezing may have guided the choice: they are then no longer independent.',
    );
}

function writeComparisons(writer: Writer): void {
  const shown = writer.input.comparisons.filter((entry) => !isCovered(writer.input, entry.partition));
  writer.heading('Against the incumbent and challengers');
  if (shown.length === 0) {
    writer.notEvidenced('Comparison with the incumbent or a challenger');
    return;
  }
  writer.table('Paired comparison of AUC on the same rows (DeLong 1988)', shown[0].evidence, {
    columns: [
      { title: 'Against', grow: 1 },
      { title: 'Partition' },
      { title: 'Its AUC', align: 'right' },
      { title: 'Difference', align: 'right' },
      { title: '95 % interval', align: 'right' },
      { title: 'p-value', align: 'right' },
      { title: 'Evidence' },
    ],
    rows: shown.map((entry) => ({
      cells: [
        entry.against,
        partitionLabel[entry.partition].toLowerCase(),
        area(entry.auc),
        fixed(entry.difference, 4),
        entry.interval === null ? '–' : intervalText(entry.interval.lower, entry.interval.upper, 4),
        pValue(entry.pValue),
        writer.cite(entry.evidence),
      ],
    })),
  });
  writer.note(
    'Difference: this version less the other. Tests are made on hold-out and out-of-time rows only; on rows that both were developed on the difference stands without a p-value.',
  );
}

function writeDistributions(writer: Writer): void {
  const { input, sheet } = writer;
  writer.heading('Score distribution');
  const shown = input.scoreDistributions.filter((entry) => !isCovered(input, entry.partition));
  if (shown.length === 0) writer.notEvidenced('Score distribution');
  const edges = input.result.bands.flatMap((band) => (band.from === null ? [] : [band.from]));
  for (const distribution of shown) {
    const goods = distribution.goods.reduce((sum, count) => sum + count, 0);
    const bads = distribution.bads.reduce((sum, count) => sum + count, 0);
    writer.figure(
      `Goods above and bads below by score, ${partitionLabel[distribution.partition].toLowerCase()}`,
      distribution.evidence,
      {
        height: 150,
        alt: `Distribution of the score of ${whole(goods)} goods above the axis and ${whole(bads)} bads below it.`,
        finding: `${plural(Math.round(goods), 'good')}, ${plural(Math.round(bads), 'bad')}; heights are shares of all goods and of all bads; ochre notches are the edges of the score bands.`,
      },
      (box) => drawScoreDistribution(sheet, box, distribution, edges),
    );
  }
}

function writeBands(writer: Writer): void {
  const { input, sheet } = writer;
  const { bands, psi } = input.result;
  writer.heading('Score bands');
  for (const partition of partitions) {
    if (isCovered(input, partition)) continue;
    const total = bands.reduce((sum, band) => sum + band[partition].rows, 0);
    if (total === 0) continue;
    const calibration = input.bandCalibrations.find((entry) => entry.partition === partition) ?? null;
    const rates = bands
      .map((band) => (band[partition].rows > 0 ? band[partition].bads / band[partition].rows : null))
      .filter((value) => value !== null);
    const reversals = rates.filter((value, index) => index > 0 && value > rates[index - 1]).length;
    const widest = Math.max(...bands.map((band) => band[partition].rows / total));
    writer.table(
      `Score bands, ${partitionLabel[partition].toLowerCase()}`,
      input.resultEvidence,
      {
        columns: [
          { title: 'Score', grow: 1 },
          { title: 'Rows', align: 'right' },
          { title: 'Share', align: 'right' },
          { title: 'Goods', align: 'right' },
          { title: 'Bads', align: 'right' },
          { title: 'Bad rate', align: 'right' },
          { title: '95 % interval', align: 'right' },
          { title: 'Mean PD', align: 'right' },
        ],
        rows: bands.map((band, index) => {
          const counts = band[partition];
          const interval = rateInterval(counts.bads, counts.rows);
          return {
            cells: [
              bandText(band.from, band.to),
              whole(counts.rows),
              rate(counts.rows, total),
              whole(counts.goods),
              whole(counts.bads),
              rate(counts.bads, counts.rows),
              interval === null ? '–' : `${percent(interval.lower)} to ${percent(interval.upper)}`,
              calibration === null ? '–' : percent(calibration.bands[index].meanPd),
            ],
          };
        }),
      },
      `${reversals === 0 ? 'The bad rate falls from band to band throughout' : `The bad rate rises against the order in ${plural(reversals, 'place')}`}; the widest band holds ${percent(widest)} of the rows${widest > 0.3 ? ', above the 30 % that are usually flagged' : ''}.`,
    );
  }
  writer.note(
    'Edges on the unrounded score, lower edge included; Wilson’s interval. A band above 25 to 30 % is flagged (common practice).',
  );

  writer.heading('Calibration by band');
  const shown = input.bandCalibrations.filter((entry) => !isCovered(input, entry.partition));
  if (shown.length === 0) writer.notEvidenced('Mean PD by band');
  else {
    writer.figure(
      'Observed bad rate against mean PD by band',
      shown[0].evidence,
      { height: 246, alt: calibrationInWords(writer), finding: calibrationInWords(writer) },
      (box) => drawCalibration(sheet, box, shown),
    );
  }

  writer.heading('Stability of the score');
  writer.table('Population stability against development', input.resultEvidence, {
    columns: [{ title: 'Partition', grow: 1 }, { title: 'PSI', align: 'right' }, { title: 'Usual reading' }],
    rows: (['holdOut', 'outOfTime'] as const).map((partition) => {
      const covered = isCovered(input, partition);
      return {
        cells: [
          partitionLabel[partition],
          covered ? 'covered' : fixed(psi[partition], 4),
          covered ? '–' : stabilityReading(psi[partition]),
        ],
      };
    }),
  });
  writer.note(
    `PSI below 0.10 small, to 0.25 moderate, above large (common practice). Smoothing ${significant(input.specification.psi.smoothing)}; a band empty on one side leaves PSI undefined.`,
  );
}

function calibrationInWords(writer: Writer): string {
  const { input } = writer;
  const entry = input.bandCalibrations.find(({ partition }) => partition === 'holdOut') ?? input.bandCalibrations[0];
  const outside = entry.bands.filter(({ meanPd, rows, bads }) => {
    const interval = rateInterval(bads, rows);
    return meanPd !== null && interval !== null && (meanPd < interval.lower || meanPd > interval.upper);
  }).length;
  const where = partitionLabel[entry.partition].toLowerCase();
  return outside === 0
    ? `On ${where} rows the mean PD lies inside the 95 % interval of the bad rate in every band.`
    : `On ${where} rows the mean PD lies outside the 95 % interval of the bad rate in ${plural(outside, 'band')} of ${whole(entry.bands.length)}.`;
}
