import type { Fine } from '@tallystone/contracts/binnings/bins';
import type { CharacteristicMonths, MonthlyCounts } from '@tallystone/contracts/binnings/months';
import type { SampleDefinitionContent } from '@tallystone/contracts/samples/definition';
import type { Sequelize, Transaction } from 'sequelize';
import type { CountedMonths } from '../../classing/months';
import type { CountedRows } from '../../classing/fine-classes';
import { rows } from '../../database/sql';
import { inTransaction } from '../../database/transaction';
import { type RowMonths, monthsOfRows } from '../../replay/row-months';
import { textsOf } from '../../replay/source';
import { openSample } from '../../storage/columnStore';
import { runInThread } from '../../threads/run-in-thread';
import { outOfTimeOpened } from '../out-of-time/state';
import { findDefinition, loadPrepared } from '../samples/definitions';
import { shared } from './class-characteristics';
import type { FoundCharacteristic, OnBench } from './find-characteristic';

/** Slots by month lie apart from their characteristic: they are many, and only its bench and its saves read them. */

/** Twenty years: a column with more is no date of application. */
const mostMonths = 240;

/** The column that says when somebody applied. */
export const dateColumnOf = (content: SampleDefinitionContent): string | null =>
  content.columns.find(({ role }) => role === 'application date')?.column ?? null;

/** When each row of a sample applied; null where it does not say, or says more months than are read. */
export async function loadRowMonths(
  sequelize: Sequelize,
  sampleId: string,
  content: SampleDefinitionContent,
): Promise<RowMonths | null> {
  const name = dateColumnOf(content);
  if (name === null) return null;
  const source = await openSample(sequelize, sampleId, [name]);
  const dates = source.column(name);
  return dates ? monthsOfRows(textsOf(dates, source.rows), { most: mostMonths, gaps: false }) : null;
}

/** What is stored of one characteristic: null where its sample has no months, undefined where they have not been counted yet. */
export async function storedMonths(
  sequelize: Sequelize,
  characteristicId: string,
  tx: Transaction | null = null,
): Promise<CountedMonths | null | undefined> {
  const [found] = await rows<{ counts: MonthlyCounts | null; outOfTime: CountedMonths['outOfTime'] | null }>(
    sequelize,
    'SELECT counts, out_of_time AS "outOfTime" FROM binning_months WHERE characteristic_id = $1',
    [characteristicId],
    tx,
  );
  if (!found) return undefined;
  return found.counts && { counts: found.counts, outOfTime: found.outOfTime ?? [] };
}

export async function storeMonths(
  sequelize: Sequelize,
  tx: Transaction,
  characteristicId: string,
  months: CountedMonths | null,
): Promise<void> {
  await rows(
    sequelize,
    `INSERT INTO binning_months (characteristic_id, counts, out_of_time) VALUES ($1, $2::jsonb, $3::jsonb)
     ON CONFLICT (characteristic_id) DO UPDATE SET counts = excluded.counts, out_of_time = excluded.out_of_time RETURNING characteristic_id`,
    [characteristicId, months && JSON.stringify(months.counts), months && JSON.stringify(months.outOfTime)],
    tx,
  );
}

/** What counting months of the characteristics of one sample needs, read once for all of them. */
export interface MonthsSource {
  readonly sampleId: string;
  readonly content: SampleDefinitionContent;
  readonly counted: CountedRows;
  readonly months: RowMonths | null;
}

export async function openMonths(sequelize: Sequelize, definitionId: string): Promise<MonthsSource> {
  const definition = await findDefinition(sequelize, definitionId);
  if (!definition) throw new Error(`There is no sample definition ${definitionId}`);
  const months = await loadRowMonths(sequelize, definition.sampleId, definition.content);
  const counted = shared(await loadPrepared(sequelize, definitionId));
  return { sampleId: definition.sampleId, content: definition.content, counted, months };
}

/** Counts one characteristic by month from its column; null where the sample has no months. */
export async function countMonthsOf(
  sequelize: Sequelize,
  { sampleId, content, counted, months }: MonthsSource,
  { column: name, kind, fine }: Pick<FoundCharacteristic, 'column' | 'kind'> & { readonly fine: Fine },
): Promise<CountedMonths | null> {
  const defined = content.columns.find(({ column }) => column === name);
  if (!months || !defined) return null;
  const column = (await openSample(sequelize, sampleId, [name])).column(name);
  if (!column) throw new Error(`The sample has no column ${name}`);
  return runInThread('binning.months', {
    defined: { column: name, kind, special: defined.special },
    column,
    data: content.data,
    counted,
    fine,
    months,
  });
}

/** Counts by month of one characteristic; counted now where it was classed before months were. Out-of-time while opened alone. */
export async function presentMonths(sequelize: Sequelize, { binning, characteristic }: OnBench): Promise<CharacteristicMonths> {
  const definition = await findDefinition(sequelize, binning.definitionId);
  const opened = await outOfTimeOpened(sequelize, binning.definitionId);
  let months = await storedMonths(sequelize, characteristic.id);
  if (months === undefined) {
    months = await countMonthsOf(sequelize, await openMonths(sequelize, binning.definitionId), characteristic);
    await keepCounted(sequelize, characteristic, months);
  }
  return {
    dateColumn: months && definition ? dateColumnOf(definition.content) : null,
    ...(months?.counts ?? { development: [], holdOut: [], undated: 0 }),
    outOfTime: opened ? (months?.outOfTime ?? []) : null,
  };
}

/** Keeps what was counted, unless somebody split a fine class meanwhile: those counts would be of other slots. */
async function keepCounted(sequelize: Sequelize, { id, fine }: FoundCharacteristic, months: CountedMonths | null): Promise<void> {
  await inTransaction(sequelize, async (tx) => {
    const [now] = await rows<{ edges: number }>(
      sequelize,
      `SELECT jsonb_array_length(fine -> 'edges') AS edges FROM binning_characteristics WHERE id = $1 FOR UPDATE`,
      [id],
      tx,
    );
    if (now?.edges === fine.edges.length) await storeMonths(sequelize, tx, id, months);
  });
}
