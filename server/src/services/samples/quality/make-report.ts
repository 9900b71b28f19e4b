import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { DefinedColumn } from '@tallystone/contracts/samples/definition';
import type { ColumnQualityDetail, QualityMonth, QualityReport } from '@tallystone/contracts/samples/quality';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../../database/sql';
import type { RunContext } from '../../../jobs/handler';
import { type RaisedFlag, judgeColumn, judgeFile } from '../../../profiling/quality/judge';
import type { RowFacts } from '../../../profiling/quality/measure';
import type { Needed } from '../../../profiling/quality/read-column';
import { NO_MONTH, type RowMonths, monthsOfRows } from '../../../replay/row-months';
import type { TextColumn } from '../../../replay/source';
import { BAD, DEVELOPMENT, GOOD, HOLD_OUT, type Prepared } from '../../../replay/types';
import { readContents, readStoredColumn } from '../../../storage/columnStore';
import { runInThread } from '../../../threads/run-in-thread';
import { profilesOf } from '../columns-of';
import { findDefinition, loadPrepared } from '../definitions';
import { type FoundSample, findSample } from '../find-sample';
import { inTurn } from '../in-turn';

export interface MadeReport {
  readonly definitionId: string;
  readonly months: QualityMonth[];
  readonly baseline: QualityReport['baseline'];
  readonly flags: RaisedFlag[];
  readonly columns: ColumnQualityDetail[];
}

/** Months of one year, which the later ones are compared with. */
const firstYear = 12;
/** More months than an applicant's file can span: the column holds something else. */
const mostMonths = 600;
/** A dictionary of more texts would take more room than the column, and no group of it has any size. */
const mostTexts = 50_000;

/**
 * Makes the report of a confirmed definition: columns one after the other, in the worker threads. In memory are the outcome and the month of
 * each row (three bytes), and for each thread one column.
 */
export async function makeReport(
  definitionId: string,
  { context, signal, progress }: Pick<RunContext<unknown>, 'context' | 'signal' | 'progress'>,
): Promise<MadeReport> {
  const { sequelize } = context;
  const definition = await findDefinition(sequelize, definitionId);
  const sample = definition && (await findSample(sequelize, definition.modelId, definition.sampleId));
  if (!definition || !sample?.readingId || !sample.reading || sample.rows === null)
    throw new Error(`There is no sample definition ${definitionId}`);
  const { readingId, reading, rows: count } = sample;
  const profiles = await profilesOf(sequelize, readingId);
  const defined = new Map(definition.content.columns.map((column) => [column.column, column]));
  const outcome = knownOutcome(await loadPrepared(sequelize, definitionId));
  const dates = await datesOf(sequelize, sample, profiles, defined);
  const applied = dates && monthsOfRows(dates, { most: mostMonths, gaps: true });
  const months = applied ? countMonths(applied, outcome) : [];
  const baselineMonths = months.length > firstYear ? firstYear : 0;
  const facts: RowFacts = { outcome, month: applied?.of ?? null, months: months.length, baselineMonths };

  const columns: ColumnQualityDetail[] = [];
  const raised = new Map<number, RaisedFlag[]>();
  await inTurn(profiles, async (profile) => {
    signal.throwIfAborted();
    const column = defined.get(profile.column) ?? unused(profile);
    const contents = await readContents(sequelize, readingId, profile.position);
    const measure = await runInThread(
      'sample.quality',
      {
        contents,
        rows: count,
        reading: { needed: neededOf(profile, column), choices: reading, special: column.special.map(({ values }) => values) },
        specialLabels: column.special.map(({ label }) => label),
        facts,
      },
      { signal, transfer: contents.map(({ buffer }) => buffer) },
    );
    const { detail, flags } = judgeColumn(profile, column, measure, months, baselineMonths);
    columns.push(detail);
    raised.set(profile.position, flags);
    progress('Looking at the columns', columns.length / profiles.length);
  });
  columns.sort((a, b) => a.position - b.position);
  return {
    definitionId,
    months,
    baseline:
      baselineMonths === 0
        ? null
        : {
            from: months[0].month,
            to: months[baselineMonths - 1].month,
            rows: months.slice(0, baselineMonths).reduce((sum, month) => sum + month.rows, 0),
          },
    flags: [
      ...judgeFile(count, sample.duplicateRows ?? 0, months),
      ...columns.flatMap(({ position }) => raised.get(position) ?? []),
    ],
    columns,
  };
}

export async function storeReport(
  sequelize: Sequelize,
  tx: Transaction,
  runId: string,
  { definitionId, months, baseline, flags, columns }: MadeReport,
): Promise<{ definitionId: string; flags: number }> {
  await rows(
    sequelize,
    `INSERT INTO quality_reports (definition_id, run_id, baseline, months, flags) VALUES ($1, $2, $3::jsonb, $4::jsonb, $5::jsonb)
     RETURNING definition_id`,
    [definitionId, runId, JSON.stringify(baseline), JSON.stringify(months), JSON.stringify(flags)],
    tx,
  );
  for (const column of columns) {
    await rows(
      sequelize,
      'INSERT INTO quality_columns (definition_id, position, detail) VALUES ($1, $2, $3::jsonb) RETURNING position',
      [definitionId, column.position, JSON.stringify(column)],
      tx,
    );
  }
  return { definitionId, flags: flags.length };
}

/** Per row 1 good, 0 bad, 255 not known. Rows of out-of-time are never known here, so that no cover has to be lifted for the report. */
function knownOutcome({ partition, outcome }: Prepared): Uint8Array {
  const known = new Uint8Array(new SharedArrayBuffer(outcome.length)).fill(255);
  for (let row = 0; row < outcome.length; row++) {
    if (partition[row] !== DEVELOPMENT && partition[row] !== HOLD_OUT) continue;
    if (outcome[row] === GOOD) known[row] = 1;
    else if (outcome[row] === BAD) known[row] = 0;
  }
  return known;
}

function datesOf(
  sequelize: Sequelize,
  sample: FoundSample,
  profiles: readonly ColumnProfile[],
  defined: ReadonlyMap<string, DefinedColumn>,
): Promise<TextColumn> | null {
  const profile = profiles.find(({ column, kind }) => kind === 'date' && defined.get(column)?.role === 'application date');
  if (!profile || sample.readingId === null || sample.rows === null) return null;
  return readStoredColumn(sequelize, sample.readingId, profile.position, sample.rows);
}

/** Rows and known outcomes of every month from the first to the last. */
function countMonths({ of, names }: RowMonths, outcome: Uint8Array): QualityMonth[] {
  const months = names.map((month) => ({ month, rows: 0, goods: 0, bads: 0, unknown: 0 }));
  for (let row = 0; row < of.length; row++) {
    if (of[row] === NO_MONTH) continue;
    const month = months[of[row]];
    month.rows++;
    if (outcome[row] === 1) month.goods++;
    else if (outcome[row] === 0) month.bads++;
    else month.unknown++;
  }
  return months;
}

function neededOf(profile: ColumnProfile, { kind }: DefinedColumn): Needed {
  if (profile.hashed || kind === 'date') return 'presence';
  const held = profile.flags.some(({ code }) => code === 'holds-personal-data');
  // Texts of such a column are shown nowhere, and its numbers only where they are no card or telephone numbers.
  if (held && (kind !== 'numeric' || profile.numeric === null)) return 'presence';
  if (kind === 'numeric') return 'numbers';
  return profile.distinct <= mostTexts ? 'texts' : 'presence';
}

const unused = (profile: ColumnProfile): DefinedColumn => ({
  column: profile.column,
  kind: profile.kind,
  role: 'not used',
  protected: false,
  citation: null,
  special: [],
  reason: null,
});
