import type { CharacteristicBalance, DraftBalance } from '@tallystone/contracts/samples/balance';
import { byIndex, largerReading } from '@tallystone/contracts/samples/balance-reading';
import { partitionWords } from '@tallystone/contracts/specification/partition';
import type { Context } from '../../context';
import { rows } from '../../database/sql';
import type { RunContext } from '../../jobs/handler';
import { actorOf } from '../people/actor-of';
import { appendRecord } from '../record/append';
import { balanceOf } from './balance';
import { comparedSince } from './compared-partitions';
import type { FoundDraft } from './draft';
import { carryOutDraft } from './draft-run';

/**
 * Compares the partitions that the draft gives. Each comparison is kept and recorded with its partition: looking at many seeds to keep the one that
 * pleases is a choice as well, and the validator sees it.
 */
export async function comparePartitions(
  payload: { readonly sampleId: string; readonly revision: number },
  run: Pick<RunContext<{ revision: number }>, 'context' | 'signal' | 'progress' | 'finish'> & {
    readonly run: { readonly personId: string };
  },
): Promise<void> {
  const { context, signal } = run;
  run.progress('counting', 0.05);
  const { sample, content, answer } = await carryOutDraft(context, payload, signal);
  const characteristics = await balanceOf(context, sample, content, answer.prepared, {
    signal,
    onColumn: (done, count) => run.progress('comparing the partitions', 0.1 + (0.85 * done) / count),
  });
  const partition = partitionWords(content.partition);
  const largest = largestOf(characteristics);
  await run.finish(async (tx) => {
    await rows(
      context.sequelize,
      `INSERT INTO sample_draft_comparisons (sample_id, reading_id, revision, partition, largest, characteristics, compared_by)
       VALUES ($1, $2, $3, $4, $5, $6::jsonb, $7) RETURNING id`,
      [sample.id, sample.readingId, payload.revision, partition, largest, JSON.stringify(characteristics), run.run.personId],
      tx,
    );
    await appendRecord(tx, {
      actor: await actorOf(run.run.personId, tx),
      action: 'sample.compared',
      entity: 'sample',
      entityId: sample.id,
      modelId: sample.modelId,
      after: { revision: payload.revision, partition, largest },
    });
    return { revision: payload.revision };
  });
}

function largestOf(characteristics: readonly CharacteristicBalance[]): number | null {
  const first = byIndex(characteristics).at(0);
  return first === undefined ? null : (largerReading(first)?.index ?? null);
}

/** What was last compared of a draft, and every partition that was compared since the last definition. */
export async function readDraftBalance(context: Context, { sample, revision }: FoundDraft): Promise<DraftBalance> {
  const [last] = await rows<{ revision: number; readingId: string; characteristics: CharacteristicBalance[] | null }>(
    context.sequelize,
    `SELECT revision, reading_id AS "readingId", characteristics FROM sample_draft_comparisons WHERE sample_id = $1 ORDER BY sequence DESC LIMIT 1`,
    [sample.id],
  );
  return {
    last: last
      ? {
          revision: last.revision,
          current: last.revision === revision && last.readingId === sample.readingId,
          characteristics: last.characteristics,
        }
      : null,
    compared: await comparedSince(context.sequelize, sample.id, sample.latestDefinitionId),
  };
}
