import type { ComparedMetrics } from '@tallystone/contracts/comparison/schema';
import type { ResultMetrics } from '@tallystone/contracts/result/types';
import type { AcceptsOnly } from '../input';
import { area, fixed, percent, plural, significant, whole } from '../number-texts';
import type { Writer } from '../page/writer';
import { inferenceText, isCovered, partitionLabel, partitions } from './wording';

/** What is assumed of applicants whose outcome the sample does not tell, for section 7: how frequent bads are among all, and who was declined. */

/** The intercept before and after; without a refit or a recalibration the one before stands on the path. */
export function writeCorrection(writer: Writer): void {
  const { result, specification, resultEvidence, priorCorrection } = writer.input;
  const stated = specification.priorCorrection;
  writer.heading('Prior correction');
  if (stated === null) {
    writer.text('None is stated: the bad rate of the sample is taken for that of the population.');
    return;
  }
  const before = result.path.find(({ lambda }) => lambda === result.lambda)?.intercept;
  writer.facts([
    ['Bad rate of the population', `${percent(stated.populationBadRate, 2)} ${writer.cite(resultEvidence)}`],
    [
      'Bad rate of the sample',
      priorCorrection === null
        ? ''
        : `${percent(priorCorrection.sampleBadRate, 2)} of development, weighted ${writer.cite(priorCorrection.evidence)}`,
    ],
    [
      'Added to the intercept',
      priorCorrection === null
        ? ''
        : `${fixed(priorCorrection.shift, 6)} in ln(good:bad) ${writer.cite(priorCorrection.evidence)}`,
    ],
    ['Reason', priorCorrection?.reason ? `${priorCorrection.reason} ${writer.cite(priorCorrection.evidence)}` : ''],
  ]);
  const moved =
    before === undefined || specification.recalibration !== null || specification.fit.refit !== null
      ? `The intercept is ${fixed(result.intercept, 4)} after it`
      : `It moves the intercept from ${fixed(before, 4)} to ${fixed(result.intercept, 4)}`;
  writer.text(
    `The prior correction allows for a sample in which bads are more or less frequent than in the population (King and Zeng 2001, from memory). ${moved} ${writer.cite(resultEvidence)}; coefficients, the order of applicants, AUC and KS stay. Calibration in the large, which is measured on the sample, reads off by about as much.`,
  );
}

export function writeDeclined(writer: Writer): void {
  const { result, specification, resultEvidence, inferenceReason, acceptsOnly } = writer.input;
  const { declined } = specification;
  writer.heading('Declined applicants');
  if (declined === null) {
    writer.text('No decision column is stated: nobody is treated as declined.');
    return;
  }
  const count = `${plural(result.counts.declined, 'row')} ${writer.cite(resultEvidence)}`;
  if (declined.method === 'none') {
    writer.facts([
      ['Declined', count],
      ['Reject inference', inferenceText(declined)],
    ]);
    writer.caution(
      'The model has seen accepted applicants alone. What it says of applicants like those who were declined rests on extrapolation, which accepted applicants cannot put to the test (Hand and Henley 1993, from memory).',
    );
    return;
  }
  writer.facts([
    ['Declined', count],
    ['Reject inference', inferenceText(declined)],
    ['Reason', inferenceReason === null ? '' : `${inferenceReason.reason} ${writer.cite(inferenceReason.evidence)}`],
  ]);
  writer.caution(
    'Declined applications enter WOE and fit by inference. Its assumptions cannot be tested on accepted applications (Hand and Henley 1993; Crook and Banasik 2004, both from memory). Every figure below is measured on known outcomes alone.',
  );
  if (acceptsOnly === null) writer.notEvidenced('Fit on accepted applicants alone');
  else writeAcceptsOnly(writer, acceptsOnly);
}

/** Both fits in figures on the same rows, then in coefficients. The paired tests stand in section 11. */
function writeAcceptsOnly(writer: Writer, beside: AcceptsOnly): void {
  const { input } = writer;
  const { result } = input;
  const evidence = [input.resultEvidence, beside.evidence].filter(Boolean).join(', ') || null;
  const measures: [string, (own: ResultMetrics) => string, (other: ComparedMetrics) => string][] = [
    ['AUC', (own) => area(own.auc), (other) => area(other.auc)],
    ['KS', (own) => area(own.ks), (other) => area(other.ks)],
    ['Brier score', (own) => fixed(own.brier, 4), (other) => fixed(other.brier, 4)],
    ['calibration in the large', (own) => fixed(own.calibrationInTheLarge, 3), (other) => fixed(other.calibrationInTheLarge, 3)],
  ];
  const byPartition = partitions
    .filter((partition) => !isCovered(input, partition))
    .flatMap((partition) => {
      const own = result.metrics[partition];
      const other = beside[partition];
      if (own === null || other === null) return [];
      return measures.map(([name, ofOwn, ofOther]) => ({
        cells: [`${partitionLabel[partition]}, ${name}`, ofOwn(own), ofOther(other)],
      }));
    });
  writer.table(
    'This version beside the fit on accepted applicants alone',
    evidence,
    {
      columns: [
        { title: 'Measure', grow: 1 },
        { title: 'With inference', align: 'right' },
        { title: 'Accepts only', align: 'right' },
      ],
      rows: [
        { cells: ['Penalty', significant(result.lambda, 6), significant(beside.lambda, 6)] },
        { cells: ['Characteristics kept', whole(result.kept), whole(beside.kept)] },
        ...byPartition,
      ],
    },
    `The other is fit ${whole(beside.number)}, “${beside.name}”, at the penalty ${beside.chosenBy === 'not chosen' ? 'of the one-standard-error rule, as none is chosen' : `chosen: ${beside.chosenBy}`}.`,
  );
  const flipped = beside.coefficients.filter(({ own, beside: other }) => (own ?? 0) * (other ?? 0) < 0);
  const moved = beside.coefficients.filter(({ own, beside: other }) => (own ?? 0) !== 0 || (other ?? 0) !== 0);
  writer.table(
    'Coefficients with inference and without',
    beside.evidence,
    {
      columns: [
        { title: 'Characteristic', grow: 1 },
        { title: 'With inference', align: 'right' },
        { title: 'Accepts only', align: 'right' },
      ],
      rows: moved.map(({ column, own, beside: other }) => ({
        cells: [writer.labelWithUnit(column), coefficient(own), coefficient(other)],
      })),
    },
    flipped.length === 0
      ? 'No coefficient changes its sign.'
      : `${flipped.map(({ column }) => writer.label(column)).join(', ')}: the sign changes.`,
  );
  writer.note(
    'WOE is of the rows each fit has seen, so that coefficients stand on scales that differ a little. The paired comparison of AUC stands in section 11.',
  );
}

const coefficient = (value: number | null): string => (value === null ? '–' : value === 0 ? 'not kept' : fixed(value, 4));
