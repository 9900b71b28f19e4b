import { type ChoiceRule, type FitSettings, type FitState, noInference } from '@tallystone/contracts/fits/schema';
import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import type { RunState } from '@tallystone/contracts/runs/schema';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';
import type { FitStanding } from '../../policies/fits';
import { tombstoneOf } from '../../storage/erasure';

/** A fit with everything its summary shows. */
export interface FoundFit extends FitStanding {
  readonly id: string;
  readonly modelId: string;
  readonly number: number;
  readonly name: string;
  readonly binningId: string;
  readonly binningName: string;
  readonly definitionId: string;
  readonly settings: FitSettings;
  readonly specificationSha256: string;
  readonly characteristics: number;
  readonly acceptsOnlyId: string | null;
  readonly runId: string | null;
  readonly revision: number;
  readonly createdAt: Date;
  readonly createdBy: string;
  readonly createdByName: string;
  readonly stale: boolean;
  readonly problem: string | null;
  readonly choice: FoundChoice | null;
  readonly holdOutAuc: number | null;
}

export interface FoundChoice {
  readonly id: string;
  readonly place: number;
  readonly lambda: number;
  readonly kept: number;
  readonly rule: ChoiceRule;
  readonly reason: string;
  readonly by: string;
  readonly byId: string;
  readonly at: string;
}

interface Row extends Omit<FoundFit, 'model' | 'state' | 'problem' | 'choice'> {
  readonly memberIds: readonly string[];
  readonly runState: RunState | null;
  readonly runProblem: ProblemItem | null;
  readonly fitted: boolean;
  readonly choice: FoundChoice | null;
}

// Stale: a characteristic of the binning has another revision now, or one came or went.
const select = `
  SELECT f.id, f.model_id AS "modelId", f.number, f.name, f.binning_id AS "binningId", b.name AS "binningName", f.definition_id AS "definitionId",
         f.settings, f.specification_sha256 AS "specificationSha256", f.characteristics, f.accepts_only_id AS "acceptsOnlyId", f.run_id AS "runId", f.revision,
         f.created_at AS "createdAt", f.created_by AS "createdBy", p.name AS "createdByName",
         f.binning_revisions IS DISTINCT FROM (
           SELECT coalesce(jsonb_object_agg(c.column_name, c.revision), '{}'::jsonb)
             FROM binning_characteristics c WHERE c.binning_id = f.binning_id AND c.included
         ) AS stale,
         ARRAY(SELECT person_id::text FROM model_members WHERE model_id = f.model_id) AS "memberIds",
         ${tombstoneOf('(SELECT sample_id FROM sample_definitions WHERE id = f.definition_id)')} AS erased, r.state AS "runState", r.problem AS "runProblem", fp.fit_id IS NOT NULL AS fitted,
         (fp.hold_out -> coalesce(ch.place, (fp.path -> 'crossValidation' ->> 'oneStandardError')::integer) ->> 'auc')::double precision AS "holdOutAuc",
         CASE WHEN ch.id IS NULL THEN NULL ELSE jsonb_build_object('id', ch.id, 'place', ch.place, 'lambda', ch.lambda, 'kept', ch.kept, 'rule', ch.rule,
           'reason', ch.reason, 'by', cp.name, 'byId', ch.chosen_by,
           'at', to_char(ch.chosen_at AT TIME ZONE 'UTC', 'YYYY-MM-DD"T"HH24:MI:SS.MS"Z"')) END AS choice
    FROM fits f
    JOIN binnings b ON b.id = f.binning_id
    JOIN people p ON p.id = f.created_by
    LEFT JOIN runs r ON r.id = f.run_id
    LEFT JOIN fit_paths fp ON fp.fit_id = f.id
    LEFT JOIN LATERAL (SELECT * FROM fit_choices WHERE fit_id = f.id ORDER BY sequence DESC LIMIT 1) ch ON true
    LEFT JOIN people cp ON cp.id = ch.chosen_by`;

/** The fit, or null. `lock` holds its row until the transaction ends. */
export async function findFit(sequelize: Sequelize, fitId: string, tx: Transaction | null = null, lock = false): Promise<FoundFit | null> {
  const [row] = await rows<Row>(sequelize, `${select} WHERE f.id = $1 ${lock ? 'FOR UPDATE OF f' : ''}`, [fitId], tx);
  return row ? found(row) : null;
}

/** Every fit of a model, the latest first. */
export async function findFits(sequelize: Sequelize, modelId: string, tx: Transaction | null = null): Promise<FoundFit[]> {
  return (await rows<Row>(sequelize, `${select} WHERE f.model_id = $1 ORDER BY f.number DESC`, [modelId], tx)).map(found);
}

const laterSettings: Pick<FitSettings, 'declined' | 'priorCorrection'> = {
  declined: noInference,
  priorCorrection: null,
};

function found({ memberIds, runState, runProblem, fitted, ...row }: Row): FoundFit {
  // Fits from before a setting was there were made as its default says.
  const settings: FitSettings = { ...laterSettings, ...row.settings };
  return { ...row, settings, model: { memberIds }, state: stateOf(runState, fitted), problem: fitted ? null : (runProblem?.message ?? null) };
}

/** A path that is there is ready, whatever its run says meanwhile; without one the run tells. */
function stateOf(run: RunState | null, fitted: boolean): FitState {
  if (fitted) return 'ready';
  if (run === 'running' || run === 'cancelling') return 'running';
  if (run === 'failed' || run === 'succeeded') return 'failed';
  return run === 'cancelled' ? 'cancelled' : 'queued';
}
