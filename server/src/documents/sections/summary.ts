import { fromRecord, type Writer } from '../page/writer';
import { area, fixed, percent, plural, significant, timeText, whole } from '../number-texts';
import { aucWithInterval, byPartition, judgementCaution, partitionLabel, partitions, penaltyName } from './wording';

/** 1 Summary, status, conditions. */
export function writeSummary(writer: Writer): void {
  const { input } = writer;
  const { result, version } = input;
  writer.beginSection('1', 'Summary, status, conditions');
  const holdOut = result.metrics.holdOut;
  writer.text(
    `The scorecard keeps ${plural(result.kept, 'characteristic')} of ${whole(result.characteristics.length)} at penalty ${significant(result.lambda)} (${penaltyName(result.mixing)}) ${writer.cite(input.resultEvidence)}. ` +
      (holdOut === null
        ? 'There are no hold-out figures.'
        : `On hold-out rows its AUC is ${area(holdOut.auc)} and its KS ${area(holdOut.ks)} ${writer.cite(input.resultEvidence)}.`),
  );
  writer.facts([
    ['State', version.state],
    ['Frozen', `${timeText(version.frozenAt)} by ${version.frozenBy}`],
    ['Version fingerprint', version.fingerprint],
    ['Code version', version.codeVersion],
  ]);

  const metrics = result.metrics;
  writer.table('Headline figures by partition', input.resultEvidence, {
    columns: [
      { title: 'Measure', grow: 1 },
      ...partitions.map((partition) => ({ title: partitionLabel[partition], align: 'right' as const })),
    ],
    rows: [
      ['Rows with known outcome', byPartition(input, result.counts, (counts) => whole(counts.goods + counts.bads))],
      [
        'Bad rate',
        byPartition(input, result.counts, (counts) =>
          counts.goods + counts.bads > 0 ? percent(counts.bads / (counts.goods + counts.bads)) : '–',
        ),
      ],
      ['AUC', byPartition(input, metrics, (entry) => area(entry.auc))],
      [
        '95 % interval (DeLong)',
        byPartition(input, metrics, (entry) => aucWithInterval(entry.auc, entry.aucStandardError).interval),
      ],
      ['Gini', byPartition(input, metrics, (entry) => area(entry.gini))],
      ['KS', byPartition(input, metrics, (entry) => area(entry.ks))],
      ['Brier score', byPartition(input, metrics, (entry) => fixed(entry.brier, 4))],
      ['Calibration slope', byPartition(input, metrics, (entry) => fixed(entry.calibrationSlope, 2))],
      [
        'Population stability (PSI)',
        ['–', ...byPartition(input, { development: null, ...result.psi }, (psi: number) => fixed(psi, 3)).slice(1)],
      ],
    ].map(([title, cells]) => ({ cells: [title as string, ...(cells as string[])] })),
  });

  writer.heading('Sign-offs');
  if (input.signatures.length === 0) writer.notEvidenced('Sign-offs');
  else {
    writer.table('Acts on this version', fromRecord, {
      columns: [
        { title: 'Act' },
        { title: 'Person', grow: 1 },
        { title: 'Role', grow: 1 },
        { title: 'When' },
        { title: 'Statement', grow: 3 },
        { title: 'Record', align: 'right' },
      ],
      rows: input.signatures.map((signature) => ({
        cells: [
          signature.act,
          signature.name,
          signature.role,
          timeText(signature.at),
          signature.statement ?? '–',
          signature.sequence === null ? '–' : `act ${signature.sequence}`,
        ],
      })),
    });
  }

  writer.heading('Conditions');
  if (input.conditions.length === 0) writer.text('No condition has been set on this version.');
  else {
    writer.table('Conditions of use', fromRecord, {
      columns: [
        { title: 'Condition', grow: 4 },
        { title: 'Kind' },
        { title: 'Owner', grow: 1 },
        { title: 'Due' },
        { title: 'Discharged', grow: 1 },
      ],
      rows: input.conditions.map((condition) => ({
        cells: [
          condition.text,
          condition.kind ?? '–',
          condition.owner ?? '–',
          condition.due === null ? '–' : timeText(condition.due),
          condition.discharged ?? 'open',
        ],
      })),
    });
  }
  writer.authorTexts(1, ['Recommendation', 'Monitoring plan']);
  writer.caution(judgementCaution);
}
