import { drawTwoHalves } from '../charts/two-halves';
import type { Replication } from '../input';
import { fixed, intervalText, percent, plural, significant, timeText, whole } from '../number-texts';
import { fromRecord, type Writer } from '../page/writer';

/** 15 Validation report. */
export function writeValidation(writer: Writer): void {
  const { input } = writer;
  const { validation } = input;
  writer.beginSection('15', 'Validation report');
  writer.text(
    'The validator is never the person who developed, fitted or submitted the version. What the validator writes here cannot be changed by the modeller.',
  );
  if (validation === null) writer.notEvidenced('Validation');
  else {
    writer.facts([
      ['Validator', validation.validator],
      ['Conclusion', validation.conclusion ?? ''],
      ['Concluded', validation.concludedAt === null ? '' : timeText(validation.concludedAt)],
    ]);
  }
  writer.heading('Replication');
  if (input.sourceFile?.replicable === false) {
    writer.text(`${input.sourceFile.note ?? 'No longer replicable.'} What is shown of a replication was made before.`);
  }
  if (input.replications.length === 0) writer.notEvidenced('Replication from the stored raw file');
  for (const replication of input.replications) writeReplication(writer, replication);

  writePointsStability(writer);

  writer.heading('Findings');
  if (validation?.findings == null) writer.notEvidenced('Findings');
  else if (validation.findings.length === 0) writer.text('The validator has raised no finding.');
  else {
    writer.table('Findings', fromRecord, {
      columns: [
        { title: 'No.' },
        { title: 'Finding', grow: 4 },
        { title: 'Severity' },
        { title: 'Owner', grow: 1 },
        { title: 'Due' },
        { title: 'State' },
        { title: 'Evidence' },
      ],
      rows: validation.findings.map((finding) => ({
        cells: [
          finding.number,
          finding.description,
          finding.severity,
          finding.owner,
          finding.due === null ? '–' : timeText(finding.due),
          finding.state,
          writer.cite(finding.evidence),
        ],
      })),
    });
  }
  writer.heading('Scope and opinion');
  if (validation?.scope == null) writer.notEvidenced('Scope of the validation (to be written by the validator)');
  else {
    writer.minor('Scope', `written by ${validation.validator}`);
    writer.quoted(validation.scope);
  }
  if (validation?.opinion == null) writer.notEvidenced('Opinion (to be written by the validator)');
  else {
    writer.minor('Opinion', `written by ${validation.validator}`);
    writer.quoted(validation.opinion);
  }
}

function writeReplication(writer: Writer, replication: Replication): void {
  const { sheet, input } = writer;
  const said = replication.matches
    ? `The two halves match: ${plural(replication.numbersCompared, 'number')} compared, none differs beyond the tolerance.`
    : `The two halves do not match: ${whole(replication.numbersDiffering)} of ${plural(replication.numbersCompared, 'number')} differ beyond the tolerance.`;
  writer.figure(
    `The fit and its replication: ${replication.method}`,
    replication.evidence,
    { height: 46, alt: said, finding: said },
    (box) =>
      drawTwoHalves(sheet, box, replication.matches, {
        upper: `the fit, frozen ${timeText(input.version.frozenAt)}`,
        lower: `its replication, ${timeText(replication.at)}`,
      }),
  );
  writer.facts([
    ['Made by', `${replication.by}, ${timeText(replication.at)}; ${replication.solver}`],
    [
      'Numbers',
      `${plural(replication.numbersCompared, 'number')} compared, ${whole(replication.numbersDiffering)} beyond the tolerance`,
    ],
    ['Coefficients', `largest difference ${significant(replication.largestCoefficientDifference)}`],
    ['Points', `largest difference ${significant(replication.largestPointsDifference)}`],
    [
      'Integer scores',
      replication.integerScoresEqual === null ? '' : replication.integerScoresEqual ? 'equal throughout' : 'not equal',
    ],
    ['Specification', hashText(replication.specificationSha256, input.result.specificationSha256)],
    ['Data file', hashText(replication.dataSha256, input.result.dataSha256)],
    ['Result', replication.resultSha256 ?? ''],
  ]);
  if (replication.coefficients.length === 0) return;
  const theirs = new Map(replication.coefficients.map((entry) => [entry.column, entry.coefficient]));
  const mine = input.result.characteristics.filter(
    (entry) => entry.coefficient !== null && (entry.coefficient !== 0 || (theirs.get(entry.column) ?? 0) !== 0),
  );
  const row = (name: string, own: number, other: number | null): { cells: string[] } => ({
    cells: [name, fixed(own, 9), fixed(other, 9), other === null ? '–' : significant(Math.abs(own - other))],
  });
  writer.table('Coefficients beside each other', replication.evidence, {
    columns: [
      { title: 'Number', grow: 1 },
      { title: 'The fit', align: 'right' },
      { title: 'Its replication', align: 'right' },
      { title: 'Difference', align: 'right' },
    ],
    rows: [
      row('Intercept', input.result.intercept, replication.intercept),
      ...mine.map((entry) => row(writer.label(entry.column), entry.coefficient ?? 0, theirs.get(entry.column) ?? null)),
    ],
  });
  writeChallenge(writer, replication);
}

/** Beside an independent replication: collinearity of what is kept, and the unpenalised fit by a library that shares nothing with this one. */
function writeChallenge(writer: Writer, { challenge, evidence }: Replication): void {
  if (challenge === null || challenge.varianceInflation.length === 0) return;
  const { foreign, varianceInflation, conditionIndex } = challenge;
  const fitted = 'unavailable' in foreign ? null : foreign;
  writer.text(
    fitted
      ? `Foreign challenger: the columns kept, fitted without a penalty by this library and by ml-logistic-regression 2.0.0 (plain gradient descent) on ${whole(fitted.rows)} of ${whole(fitted.of)} development rows. The largest difference of a coefficient is ${significant(fitted.largestDifference)}; about 0.001 can be expected.`
      : `Foreign challenger: not fitted. ${'unavailable' in foreign ? foreign.unavailable : ''}`,
  );
  const pairs = new Map(fitted?.coefficients.map((pair) => [pair.column, pair]));
  writer.table('Collinearity, and the unpenalised fit by two libraries', evidence, {
    columns: [
      { title: 'Characteristic', grow: 1 },
      { title: 'VIF', align: 'right' },
      { title: 'This library', align: 'right' },
      { title: 'Foreign library', align: 'right' },
    ],
    rows: varianceInflation.map(({ column, value }) => ({
      cells: [
        writer.label(column),
        value === null ? 'collinear' : fixed(value, 2),
        fixed(pairs.get(column)?.own ?? null, 5),
        fixed(pairs.get(column)?.foreign ?? null, 5),
      ],
    })),
  });
  writer.text(
    `${conditionIndex === null ? '' : `The largest condition index is ${fixed(conditionIndex, 1)}. `}A VIF above 5 is flagged (common practice).`,
  );
}

const hashText = (hash: string, expected: string): string =>
  `${hash} ${hash === expected ? '(the same)' : '(not that of the version)'}`;

function writePointsStability(writer: Writer): void {
  const { stability, result } = writer.input;
  writer.heading('Stability of points over resamples');
  const withPoints = stability?.characteristics.filter((entry) => entry.points !== null) ?? [];
  if (stability === null || withPoints.length === 0) {
    writer.notEvidenced('Stability of points over resamples');
    return;
  }
  const bins = new Map(result.characteristics.map((entry) => [entry.column, entry.bins]));
  writer.table(`Points over ${whole(stability.resamples)} resamples`, stability.evidence, {
    columns: [
      { title: 'Characteristic', grow: 2 },
      { title: 'Attribute', grow: 3 },
      { title: 'Points', align: 'right' },
      { title: `${percent(stability.level, 0)} interval`, align: 'right' },
    ],
    rows: withPoints.flatMap((entry) =>
      (bins.get(entry.column) ?? []).map((bin, index) => {
        const range = entry.points?.[index] ?? null;
        return {
          cells: [
            index === 0 ? writer.label(entry.column) : '',
            bin.label,
            whole(bin.pointsRounded),
            range === null ? '–' : intervalText(range.lower, range.upper, 1),
          ],
          under: index === 0 ? undefined : writer.label(entry.column),
        };
      }),
    ),
  });
}
