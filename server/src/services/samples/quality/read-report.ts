import { waitsForAnswer } from '@tallystone/contracts/samples/flags';
import type { ColumnQuality, ColumnQualityDetail, FlagAnswer, QualityFlag, QualityReport, QualityState } from '@tallystone/contracts/samples/quality';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../../database/sql';
import type { Actor } from '../../../models/person';
import { canAnswerFlag } from '../../../policies/samples';
import { conflict, invalidField } from '../../../problems/problem';
import { thin } from '../../../profiling/kind';
import type { RaisedFlag } from '../../../profiling/quality/judge';
import type { FoundSample } from '../find-sample';

interface StoredReport {
  readonly definitionId: string;
  readonly definitionNumber: number;
  readonly madeAt: Date;
  readonly baseline: QualityReport['baseline'];
  readonly months: QualityReport['months'];
  readonly flags: RaisedFlag[];
}

/** The report of the sample's latest definition with the answers that stand, or why there is none. */
export async function readReport(
  sequelize: Sequelize,
  sample: FoundSample,
  person: Actor,
  tx: Transaction | null = null,
): Promise<QualityState> {
  const definitionId = sample.latestDefinitionId;
  const report = definitionId === null ? null : await reportOf(sequelize, definitionId, tx);
  const [run] = await rows<{ id: string }>(
    sequelize,
    `SELECT id FROM runs WHERE kind = 'sample.quality' AND entity_id = $1 AND state IN ('queued', 'running', 'cancelling')`,
    [definitionId],
    tx,
  );
  const may = canAnswerFlag(person, sample).allowed;
  const finding =
    report?.finding ??
    (definitionId === null
      ? 'The report needs a confirmed definition: it says which rows are good and bad, and which codes are special.'
      : run
        ? 'The report is being made.'
        : 'No report was made for this definition yet.');
  return {
    report,
    definitionId,
    runId: run?.id ?? null,
    finding,
    abilities: !may ? [] : report ? ['answer'] : definitionId !== null && !run ? ['make'] : [],
  };
}

/** The report of one definition, or null where none was made. */
export async function reportOf(
  sequelize: Sequelize,
  definitionId: string,
  tx: Transaction | null = null,
): Promise<QualityReport | null> {
  const [stored] = await rows<StoredReport & { sampleId: string; rows: number; duplicateRows: number }>(
    sequelize,
    `SELECT q.definition_id AS "definitionId", d.number AS "definitionNumber", q.made_at AS "madeAt", q.baseline, q.months, q.flags,
            d.sample_id AS "sampleId", s.rows, coalesce(s.duplicate_rows, 0) AS "duplicateRows"
       FROM quality_reports q JOIN sample_definitions d ON d.id = q.definition_id JOIN samples s ON s.id = d.sample_id
      WHERE q.definition_id = $1`,
    [definitionId],
    tx,
  );
  if (!stored) return null;
  const columns = (
    await rows<{ column: ColumnQuality }>(
      sequelize,
      `SELECT detail - 'groups' - 'histogram' - 'months' AS "column" FROM quality_columns WHERE definition_id = $1 ORDER BY position`,
      [definitionId],
      tx,
    )
  ).map(({ column }) => column);
  const answers = await answersOf(sequelize, stored.sampleId, tx);
  const flags = stored.flags.map((flag): QualityFlag => ({ ...flag, answer: answers.get(keyOf(flag)) ?? null }));
  const { sampleId: _sampleId, madeAt, ...report } = stored;
  return { ...report, madeAt: madeAt.toISOString(), columns, flags, finding: findingOf(stored.rows, columns, flags) };
}

/** @throws Problem 409 while there is no report, 422 for a column that it does not have */
export async function readColumnReport(
  sequelize: Sequelize,
  { latestDefinitionId }: FoundSample,
  column: string,
): Promise<ColumnQualityDetail> {
  const [found] = await rows<{ made: boolean; detail: ColumnQualityDetail | null }>(
    sequelize,
    `SELECT EXISTS (SELECT 1 FROM quality_reports WHERE definition_id = $1) AS made,
            (SELECT detail FROM quality_columns WHERE definition_id = $1 AND detail ->> 'column' = $2) AS detail`,
    [latestDefinitionId, column],
  );
  if (!found.made) throw conflict('not-made', 'There is no report of this sample yet.');
  if (!found.detail) throw invalidField('column', 'no-such-column', `The sample has no column "${column}".`);
  return found.detail;
}

/** One segment column of a definition, by what it splits. */
export interface SegmentGroups {
  readonly column: string;
  readonly protected: boolean;
  /** Rows of the whole file; goods and bads of development and hold-out. */
  readonly groups: ColumnQualityDetail['groups'];
}

/** What the report counted of each segment column; null where none was made. Of protected ones nothing but the name. */
export async function segmentsOf(sequelize: Sequelize, definitionId: string, tx: Transaction | null = null): Promise<SegmentGroups[] | null> {
  const [{ made }] = await rows<{ made: boolean }>(sequelize, 'SELECT EXISTS (SELECT 1 FROM quality_reports WHERE definition_id = $1) AS made', [definitionId], tx);
  if (!made) return null;
  const found = await rows<SegmentGroups>(
    sequelize,
    `SELECT q.detail ->> 'column' AS "column", q.detail -> 'groups' AS groups,
            coalesce((SELECT (c ->> 'protected')::boolean FROM jsonb_array_elements(d.content -> 'columns') c WHERE c ->> 'column' = q.detail ->> 'column'), false) AS protected
       FROM quality_columns q JOIN sample_definitions d ON d.id = q.definition_id
      WHERE q.definition_id = $1 AND q.detail ->> 'role' = 'segment' ORDER BY q.position`,
    [definitionId],
    tx,
  );
  return found.map((segment) => (segment.protected ? { ...segment, groups: [] } : segment));
}

const keyOf = ({ column, code }: Pick<QualityFlag, 'column' | 'code'>): string => JSON.stringify([column, code]);

/** The latest answer to each flag of a sample. */
async function answersOf(sequelize: Sequelize, sampleId: string, tx: Transaction | null): Promise<Map<string, FlagAnswer>> {
  const all = await rows<Omit<FlagAnswer, 'at'> & Pick<QualityFlag, 'column' | 'code'> & { at: Date }>(
    sequelize,
    `SELECT a.column_name AS "column", a.code, a.answer, a.reason, p.name AS by, a.answered_at AS at
       FROM quality_answers a JOIN people p ON p.id = a.answered_by WHERE a.sample_id = $1 ORDER BY a.sequence`,
    [sampleId],
    tx,
  );
  return new Map(
    all.map(({ column, code, answer, reason, by, at }) => [
      keyOf({ column, code }),
      { answer, reason, by, at: at.toISOString() },
    ]),
  );
}

function findingOf(count: number, columns: readonly ColumnQuality[], flags: readonly QualityFlag[]): string {
  const whole = `${thin(count)} rows and ${columns.length} columns`;
  const roles = new Map(columns.map(({ column, role }) => [column, role]));
  const open = flags.filter((flag) => waitsForAnswer(flag, flag.column === null ? null : roles.get(flag.column)));
  if (open.length === 0) return `${whole}; no flag waits for an answer.`;
  const leaks = open.filter(
    ({ code }) => code === 'leakage-value' || code === 'missing-one-outcome' || code === 'one-value-per-outcome',
  );
  const suspects = new Set(leaks.map(({ column }) => column)).size;
  const more = suspects === 0 ? '' : `; ${suspects} column${suspects === 1 ? '' : 's'} may say what was known only afterwards`;
  return `${whole}: ${open.length} flag${open.length === 1 ? ' waits' : 's wait'} for an answer${more}.`;
}
