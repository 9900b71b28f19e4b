import type { AskedConstraints } from '@tallystone/contracts/binnings/bins';
import type { BinningState, NotHere } from '@tallystone/contracts/binnings/schema';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';
import type { BinningStanding } from '../../policies/binnings';
import { tombstoneOf } from '../../storage/erasure';

/** A binning with everything its summary shows and its policies need. */
export interface FoundBinning extends BinningStanding {
  readonly id: string;
  readonly modelId: string;
  readonly definitionId: string;
  readonly sampleId: string;
  readonly number: number;
  readonly name: string;
  readonly state: BinningState;
  readonly runId: string | null;
  readonly constraints: AskedConstraints;
  readonly barred: { column: string; reason: string }[];
  readonly sample: string;
  readonly problem: string | null;
  readonly characteristics: number;
  readonly included: number;
  readonly edits: number;
  readonly editsWithoutReason: number;
  readonly from: { readonly id: string; readonly name: string; readonly carried: number; readonly notCarried: number; readonly notHere: NotHere[] } | null;
  readonly createdBy: string;
  readonly createdAt: Date;
}

type Row = Omit<FoundBinning, 'model'> & { readonly memberIds: readonly string[] };

const select = `
  SELECT b.id, b.model_id AS "modelId", b.definition_id AS "definitionId", d.sample_id AS "sampleId", b.number, b.name, b.constraints, b.barred,
         b.run_id AS "runId", b.created_at AS "createdAt", p.name AS "createdBy",
         s.file_name || ', definition ' || d.number AS sample,
         CASE WHEN b.ready_at IS NOT NULL THEN 'ready' WHEN r.state = 'queued' THEN 'queued' WHEN r.state IN ('running', 'cancelling') THEN 'classing'
              WHEN r.state = 'cancelled' THEN 'cancelled' ELSE 'failed' END AS state,
         CASE WHEN b.ready_at IS NULL THEN r.problem ->> 'message' END AS problem,
         c.characteristics, c.included, e.edits, e."editsWithoutReason",
         CASE WHEN f.id IS NOT NULL THEN json_build_object('id', f.id, 'name', f.name, 'carried', k.carried,
           'notCarried', k.not_carried + (SELECT coalesce(sum((n ->> 'edits')::int), 0)::int FROM jsonb_array_elements(b.not_here) n), 'notHere', b.not_here) END AS "from",
         ARRAY(SELECT person_id::text FROM model_members WHERE model_id = b.model_id) AS "memberIds",
         ${tombstoneOf('d.sample_id')} AS erased
    FROM binnings b
    JOIN sample_definitions d ON d.id = b.definition_id
    JOIN samples s ON s.id = d.sample_id
    JOIN people p ON p.id = b.created_by
    LEFT JOIN runs r ON r.id = b.run_id
    LEFT JOIN binnings f ON f.id = b.from_binning_id
    LEFT JOIN LATERAL (
      SELECT (count(*) FILTER (WHERE e.not_carried IS NULL))::int AS carried, (count(*) FILTER (WHERE e.not_carried IS NOT NULL))::int AS not_carried
        FROM binning_edits e JOIN binning_characteristics c ON c.id = e.characteristic_id
       WHERE c.binning_id = b.id AND e.carried_from IS NOT NULL
    ) k ON f.id IS NOT NULL
    CROSS JOIN LATERAL (
      SELECT count(*)::int AS characteristics, (count(*) FILTER (WHERE included))::int AS included
        FROM binning_characteristics WHERE binning_id = b.id
    ) c
    CROSS JOIN LATERAL (
      SELECT count(*)::int AS edits, (count(*) FILTER (WHERE e.reason IS NULL))::int AS "editsWithoutReason"
        FROM binning_edits e JOIN binning_characteristics c ON c.id = e.characteristic_id
       WHERE c.binning_id = b.id AND c.included AND e.place IS NOT NULL
    ) e`;

/** The binning, or null. `lock` holds its row until the transaction ends. */
export async function findBinning(
  sequelize: Sequelize,
  binningId: string,
  tx: Transaction | null = null,
  lock = false,
): Promise<FoundBinning | null> {
  const [row] = await rows<Row>(sequelize, `${select} WHERE b.id = $1 ${lock ? 'FOR UPDATE OF b' : ''}`, [binningId], tx);
  return row ? found(row) : null;
}

/** Binnings of a model, latest first. One that was cancelled left nothing behind and is not listed. */
export async function findBinnings(
  sequelize: Sequelize,
  modelId: string,
  tx: Transaction | null = null,
): Promise<FoundBinning[]> {
  const all = await rows<Row>(sequelize, `${select} WHERE b.model_id = $1 ORDER BY b.number DESC`, [modelId], tx);
  return all.filter(({ state }) => state !== 'cancelled').map(found);
}

const found = ({ memberIds, ...row }: Row): FoundBinning => ({ ...row, model: { memberIds } });
