import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';
import { protectionOf } from '../permissions/protection';
import { comparedBefore } from '../samples/compared-partitions';
import { entriesOf } from '../samples/dictionary/find';
import { reportOf, segmentsOf } from '../samples/quality/read-report';
import { codeVersionFacts } from './code-version';
import type { NewEvidence } from './evidence';
import type { Freezing } from './freeze';

type Piece = Pick<NewEvidence, 'kind' | 'title' | 'content'>;

/** What is known when a version is frozen, as evidence E-1, E-2 …: copied, so that later changes elsewhere cannot reach it. */
export async function versionEvidence(
  sequelize: Sequelize,
  tx: Transaction,
  { fit, definition, loaded, specification, result, fingerprint, dataSha256, frozen, beside }: Freezing & { result: { text: string; sha256: string }; fingerprint: string },
): Promise<Piece[]> {
  const [sample] = await rows<Record<string, unknown>>(
    sequelize,
    `SELECT s.id, s.file_name AS "fileName", s.size::float8 AS bytes, s.rows, s.columns, s.sha256, p.name AS "receivedBy",
            to_char(s.received_at AT TIME ZONE 'UTC', 'YYYY-MM-DD"T"HH24:MI:SS.MS"Z"') AS "receivedAt",
            d.counts AS counts, d.content AS definition,
            (SELECT jsonb_agg(jsonb_build_object('name', c.name, 'kind', c.kind, 'profile', c.profile) ORDER BY c.position)
               FROM sample_columns c WHERE c.reading_id = s.reading_id) AS quality
       FROM samples s JOIN people p ON p.id = s.received_by JOIN sample_definitions d ON d.sample_id = s.id WHERE d.id = $1`,
    [definition.id],
    tx,
  );
  const edits = await rows<Record<string, unknown>>(
    sequelize,
    `SELECT c.column_name AS "column", e.what AS edit, e.reason, p.name AS by, to_char(e.made_at AT TIME ZONE 'UTC', 'YYYY-MM-DD"T"HH24:MI:SS.MS"Z"') AS at
       FROM binning_edits e JOIN binning_characteristics c ON c.id = e.characteristic_id JOIN people p ON p.id = e.made_by
      WHERE c.binning_id = $1 AND e.place IS NOT NULL ORDER BY c.position, e.place`,
    [fit.binningId],
    tx,
  );
  const balance = await rows<{ characteristics: unknown }>(sequelize, 'SELECT characteristics FROM sample_balances WHERE definition_id = $1', [definition.id], tx);
  const summaries = await rows<Record<string, unknown>>(
    sequelize,
    `SELECT column_name AS "column", summary ->> 'trend' AS trend, included, left_out_reason AS "leftOutReason" FROM binning_characteristics WHERE binning_id = $1 ORDER BY position`,
    [fit.binningId],
    tx,
  );
  const [frozenPath] = await rows<{ shift: unknown }>(sequelize, `SELECT path -> 'priorCorrection' AS shift FROM fit_paths WHERE fit_id = $1`, [fit.id], tx);
  return [
    {
      kind: 'version',
      title: 'Specification, data, code and result of the version',
      content: {
        fingerprint,
        dataSha256,
        specificationSha256: specification.sha256,
        resultSha256: result.sha256,
        ...codeVersionFacts(),
        scores: frozen.scores,
        rounding: loaded.settings.scaling.rounding,
      },
    },
    {
      kind: 'sample',
      title: 'Raw file, dictionary, exclusions, outcome, partition and quality of the columns',
      content: {
        ...sample,
        report: await reportOf(sequelize, definition.id, tx),
        dictionary: await entriesOf(sequelize, definition.id, tx),
        balance: balance.at(0)?.characteristics ?? null,
        compared: await comparedBefore(sequelize, definition.id, tx),
        segments: await segmentsOf(sequelize, definition.id, tx),
        protection: await protectionOf(sequelize, { id: definition.id, columns: definition.content.columns }, tx),
      },
    },
    { kind: 'classing', title: 'Bins, counts by partition and edits by hand', content: { edits, characteristics: summaries, bins: frozen.figures.bins } },
    {
      kind: 'fit',
      title: 'Penalty path, cross-validation and the choice of the penalty',
      content: {
        fit: { id: fit.id, number: fit.number, name: fit.name, settings: fit.settings, createdBy: fit.createdByName },
        priorCorrection: frozenPath?.shift ?? null,
        choice: fit.choice,
        path: frozen.result.path,
        crossValidation: frozen.result.crossValidation,
      },
    },
    {
      kind: 'performance',
      title: 'Discrimination, calibration and stability by partition, as frozen',
      content: {
        metrics: frozen.result.metrics,
        weightedMetrics: frozen.result.weightedMetrics,
        bands: frozen.result.bands,
        psi: frozen.result.psi,
        distributions: frozen.figures.distributions,
        bandCalibrations: frozen.figures.bandCalibrations,
        refits: frozen.refits,
        ...beside,
      },
    },
  ];
}
