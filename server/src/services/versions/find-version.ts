import type { ModelState } from '@tallystone/contracts/models/schema';
import type { Conclusion, VersionAct } from '@tallystone/contracts/versions/schema';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';
import type { VersionStanding } from '../../policies/versions';
import { tombstoneOf } from '../../storage/erasure';

/** One entry in the life of a version. */
export interface FoundAct {
  readonly id: string;
  readonly act: VersionAct;
  readonly from: ModelState | null;
  readonly to: ModelState;
  readonly conclusion: Conclusion | null;
  readonly conditions: string[];
  readonly statement: string;
  readonly by: string;
  readonly byId: string;
  readonly role: 'modeller' | 'validator' | 'compliance';
  readonly at: string;
}

/** A version with its life, without the texts of specification and result. */
export interface FoundVersion extends VersionStanding {
  readonly id: string;
  readonly modelId: string;
  readonly modelName: string;
  readonly inventoryNumber: string;
  readonly number: number;
  readonly fitId: string;
  readonly fitName: string;
  readonly binningId: string;
  readonly definitionId: string;
  readonly sampleId: string;
  readonly note: string;
  readonly specificationSha256: string;
  readonly resultSha256: string;
  readonly dataSha256: string;
  readonly scoresSha256: string;
  readonly codeVersion: string;
  readonly fingerprint: string;
  readonly kept: number;
  readonly intercept: number;
  readonly lambda: number;
  readonly frozenBy: string;
  readonly frozenAt: Date;
  readonly acts: readonly FoundAct[];
  readonly returned: boolean;
}

type Row = Omit<FoundVersion, 'model' | 'state' | 'developedBy' | 'submittedBy' | 'validators' | 'concluded' | 'returned'> & {
  readonly memberIds: readonly string[];
  readonly developers: readonly string[];
};

const select = `
  SELECT v.id, v.model_id AS "modelId", m.name AS "modelName", m.inventory_number AS "inventoryNumber", v.number, v.fit_id AS "fitId", f.name AS "fitName",
         v.binning_id AS "binningId", v.definition_id AS "definitionId", d.sample_id AS "sampleId", v.note,
         v.specification_sha256 AS "specificationSha256", v.result_sha256 AS "resultSha256", v.data_sha256 AS "dataSha256",
         v.scores_sha256 AS "scoresSha256", v.code_version AS "codeVersion", v.fingerprint,
         (v.result::jsonb ->> 'kept')::int AS kept, (v.result::jsonb ->> 'intercept')::double precision AS intercept,
         (v.result::jsonb ->> 'lambda')::double precision AS lambda,
         p.name AS "frozenBy", v.frozen_at AS "frozenAt", ${tombstoneOf('d.sample_id')} AS erased,
         ARRAY(SELECT person_id::text FROM model_members WHERE model_id = v.model_id) AS "memberIds",
         ARRAY(
           SELECT v.frozen_by::text
           UNION SELECT d.created_by::text
           UNION SELECT b.created_by::text FROM binnings b WHERE b.id = v.binning_id
           UNION SELECT e.made_by::text FROM binning_edits e JOIN binning_characteristics c ON c.id = e.characteristic_id WHERE c.binning_id = v.binning_id
           UNION SELECT f.created_by::text
           UNION SELECT c.chosen_by::text FROM fit_choices c WHERE c.fit_id = v.fit_id
           UNION SELECT s.changed_by::text FROM scorecards s WHERE s.fit_id = v.fit_id
           UNION SELECT t.changed_by::text FROM version_texts t WHERE t.version_id = v.id
           UNION SELECT a.person_id::text FROM version_acts a WHERE a.version_id = v.id AND a.act IN ('freeze', 'submit')
         ) AS developers,
         (SELECT coalesce(jsonb_agg(jsonb_build_object('id', a.id, 'act', a.act, 'from', a.from_state, 'to', a.to_state, 'conclusion', a.conclusion,
                   'conditions', a.conditions, 'statement', a.statement, 'by', ap.name, 'byId', a.person_id, 'role', a.role,
                   'at', to_char(a.at AT TIME ZONE 'UTC', 'YYYY-MM-DD"T"HH24:MI:SS.MS"Z"')) ORDER BY a.sequence), '[]'::jsonb)
            FROM version_acts a JOIN people ap ON ap.id = a.person_id WHERE a.version_id = v.id) AS acts
    FROM versions v
    JOIN models m ON m.id = v.model_id
    JOIN fits f ON f.id = v.fit_id
    JOIN sample_definitions d ON d.id = v.definition_id
    JOIN people p ON p.id = v.frozen_by`;

/** The version, or null. */
export async function findVersion(sequelize: Sequelize, versionId: string, tx: Transaction | null = null): Promise<FoundVersion | null> {
  const [row] = await rows<Row>(sequelize, `${select} WHERE v.id = $1`, [versionId], tx);
  return row ? found(row) : null;
}

/** Holds a version until the transaction ends, so that its acts come one after the other. The row itself never changes and cannot be locked. */
export async function holdVersion(sequelize: Sequelize, tx: Transaction, versionId: string): Promise<void> {
  await rows(sequelize, 'SELECT pg_advisory_xact_lock(hashtextextended($1, 7415))', [versionId], tx);
}

/** Every version of a model, the latest first. */
export async function findVersions(sequelize: Sequelize, modelId: string, tx: Transaction | null = null): Promise<FoundVersion[]> {
  return (await rows<Row>(sequelize, `${select} WHERE v.model_id = $1 ORDER BY v.number DESC`, [modelId], tx)).map(found);
}

/** Versions that wait for somebody, of every model. */
export async function findWaitingVersions(sequelize: Sequelize): Promise<FoundVersion[]> {
  const all = await rows<Row>(
    sequelize,
    `${select} WHERE (SELECT to_state FROM version_acts a WHERE a.version_id = v.id ORDER BY sequence DESC LIMIT 1) IN ('Submitted', 'In validation')
     ORDER BY v.frozen_at`,
  );
  return all.map(found);
}

function found({ memberIds, developers, ...row }: Row): FoundVersion {
  const { acts } = row;
  const state = acts[acts.length - 1]?.to ?? 'In development';
  // A withdrawal begins anew: what a validator did before it is over.
  const since = acts.slice(acts.map(({ act }) => act).lastIndexOf('withdraw') + 1);
  const latest = (act: VersionAct): FoundAct | undefined => [...since].reverse().find((entry) => entry.act === act);
  const concluding = latest('conclude');
  const last = acts[acts.length - 1];
  return {
    ...row,
    model: { memberIds },
    state,
    developedBy: new Set(developers),
    submittedBy: latest('submit')?.byId ?? null,
    validators: new Set(since.filter(({ act }) => act === 'start' || act === 'conclude').map(({ byId }) => byId)),
    concluded: concluding !== undefined,
    returned: last?.act === 'return',
  };
}
