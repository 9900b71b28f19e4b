import type { CharacteristicBalance, PartitionBalance } from '@tallystone/contracts/samples/balance';
import type { SampleDefinitionContent } from '@tallystone/contracts/samples/definition';
import type { Sequelize, Transaction } from 'sequelize';
import type { Context } from '../../context';
import { rows } from '../../database/sql';
import type { Prepared } from '../../replay/types';
import { openSample } from '../../storage/columnStore';
import { runInThread } from '../../threads/run-in-thread';
import { sharedBytes } from '../../threads/shared-bytes';
import { comparedBefore } from './compared-partitions';
import type { FoundSample } from './find-sample';
import { inTurn } from './in-turn';

/**
 * How each characteristic is spread in the partitions of a definition, in the worker threads. Each thread has one column in memory; who is in which
 * partition is shared.
 *
 * @param onColumn called after each with how many are done, of how many
 */
export async function balanceOf(
  context: Context,
  sample: FoundSample,
  content: SampleDefinitionContent,
  { partition, outcome }: Pick<Prepared, 'partition' | 'outcome'>,
  { signal, onColumn }: { readonly signal: AbortSignal; readonly onColumn: (done: number, count: number) => void },
): Promise<CharacteristicBalance[]> {
  const characteristics = content.columns.filter(({ role }) => role === 'characteristic');
  const prepared = { partition: sharedBytes(partition), outcome: sharedBytes(outcome) };
  const found = new Map<string, CharacteristicBalance>();
  await inTurn(characteristics, async (column) => {
    signal.throwIfAborted();
    const source = (await openSample(context.sequelize, sample.id, [column.column])).column(column.column);
    if (!source) throw new Error(`The sample has no column ${column.column}`);
    found.set(column.column, await runInThread('sample.balance', { column, source, data: content.data, prepared }, { signal }));
    onColumn(found.size, characteristics.length);
  });
  return characteristics.flatMap(({ column }) => found.get(column) ?? []);
}

export async function storeBalance(
  context: Context,
  tx: Transaction,
  definitionId: string,
  characteristics: readonly CharacteristicBalance[],
): Promise<void> {
  await rows(
    context.sequelize,
    'INSERT INTO sample_balances (definition_id, characteristics) VALUES ($1, $2::jsonb) RETURNING definition_id',
    [definitionId, JSON.stringify(characteristics)],
    tx,
  );
}

/** Null where this sample has no such definition. */
export async function readBalance(sequelize: Sequelize, sample: FoundSample, definitionId: string): Promise<PartitionBalance | null> {
  const [found] = await rows<Omit<PartitionBalance, 'compared'>>(
    sequelize,
    `SELECT d.id AS "definitionId", b.characteristics FROM sample_definitions d LEFT JOIN sample_balances b ON b.definition_id = d.id
      WHERE d.sample_id = $1 AND d.id = $2`,
    [sample.id, definitionId],
  );
  return found ? { ...found, compared: await comparedBefore(sequelize, definitionId) } : null;
}
