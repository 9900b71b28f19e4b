import { noLongerReplicable } from '@tallystone/contracts/samples/erased-words';
import { barredWords, permissionLines } from '@tallystone/contracts/permissions/permission-words';
import type { Result } from '@tallystone/contracts/result/types';
import { reasonTextOf } from '@tallystone/contracts/scorecards/reason-text';
import type { Specification } from '@tallystone/contracts/specification/types';
import type { Gate, GateItem, VersionTextKey, VersionTexts } from '@tallystone/contracts/versions/schema';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';
import { notMonotone } from '../../replay/not-monotone';
import { editsWithoutReason } from '../binnings/characteristics-of';
import { permittedOn } from '../permissions/permitted';
import { findDefinition } from '../samples/definitions';
import type { FoundVersion } from './find-version';
import { specialsMapped } from './special-codes';

/** Author's texts that the printed sections need, with the words a gate names them by. */
const authorsTexts: readonly (readonly [VersionTextKey, string])[] = [
  ['recommendation', 'Recommendation (section 1)'],
  ['exclusionsRationale', 'Rationale of the exclusions (section 4)'],
  ['outcomeJustification', 'Justification of the outcome (section 5)'],
  ['sourcesSuitability', 'Suitability of the sources (section 6)'],
  ['penaltyReason', 'Why this penalty (section 9)'],
  ['businessSense', 'Business sense of each characteristic (section 10)'],
  ['performanceInterpretation', 'Interpretation of the performance (section 11)'],
];

/** Everything the gates look at, read once. */
interface Looked {
  readonly version: FoundVersion;
  readonly specification: Specification;
  readonly result: Result;
  readonly texts: VersionTexts;
  readonly matchingReplications: number;
  readonly replications: number;
}

/**
 * What stands between a version and its next acts: each gate with all of its items, held or not, and where each can be put right.
 */
export async function gatesOf(sequelize: Sequelize, version: FoundVersion, tx: Transaction | null = null): Promise<Gate[]> {
  const [row] = await rows<{ specification: Specification; result: Result; texts: VersionTexts | null; replications: number; matching: number }>(
    sequelize,
    `SELECT v.specification::jsonb AS specification, v.result::jsonb AS result, t.texts,
            (SELECT count(*)::int FROM evidence e WHERE e.version_id = v.id AND e.kind = 'replication') AS replications,
            (SELECT count(*)::int FROM evidence e WHERE e.version_id = v.id AND e.kind = 'replication' AND (e.content::jsonb ->> 'matches')::boolean
                AND NOT EXISTS (SELECT 1 FROM unnest($2::text[]) AS developer WHERE developer = e.person_id::text)) AS matching
       FROM versions v LEFT JOIN version_texts t ON t.version_id = v.id WHERE v.id = $1`,
    [version.id, [...version.developedBy]],
    tx,
  );
  const looked: Looked = {
    version,
    specification: row.specification,
    result: row.result,
    texts: row.texts ?? {},
    replications: row.replications,
    matchingReplications: row.matching,
  };
  return [
    gate('submit', await submitItems(sequelize, looked, tx)),
    gate('conclude', concludeItems(looked)),
    gate('accept', acceptItems(looked)),
  ];
}

const gate = (act: Gate['act'], items: GateItem[]): Gate => ({ act, open: items.every(({ holds }) => holds), items });

async function submitItems(sequelize: Sequelize, { version, specification, result, texts }: Looked, tx: Transaction | null): Promise<GateItem[]> {
  const model = `/models/${version.modelId}`;
  const definition = await findDefinition(sequelize, version.definitionId, tx);
  const edits = await editsWithoutReason(sequelize, version.binningId, tx);
  const counted = reconciled(result, definition?.rows ?? 0);
  const permitted = await permittedOn(sequelize, version.definitionId, tx);
  const barred = (definition?.content.columns ?? []).filter(
    (column) => column.protected && !permitted.has(column.column) && specification.characteristics.some((entry) => entry.column === column.column),
  );
  const kept = result.characteristics.filter((entry) => entry.coefficient !== 0);
  const untold = kept.filter(({ column }) => reasonTextOf(specification.reasons.texts, column) === '');
  const turning = notMonotone(specification, result);
  const against = kept.filter((entry) => (entry.coefficient ?? 0) < 0);
  return [
    {
      code: 'exclusions-reconcile',
      label: 'Exclusions reconcile',
      holds: counted.holds,
      detail: counted.detail,
      path: `${model}/sample/${version.sampleId}`,
    },
    {
      code: 'edits-explained',
      label: 'Each manual bin edit has a reason',
      holds: edits.length === 0,
      detail: edits.length === 0 ? 'Every edit by hand says why.' : `Without a reason: ${edits.map(({ column, what }) => `${column} (${what})`).join('; ')}.`,
      path: edits.length === 0 ? `${model}/binning/${version.binningId}` : `${model}/binning/${version.binningId}/${edits[0].characteristicId}`,
    },
    {
      code: 'special-codes-mapped',
      label: 'Special codes are mapped',
      ...specialsMapped(specification, definition?.content.columns ?? []),
      path: `${model}/binning/${version.binningId}`,
    },
    {
      code: 'no-barred-field',
      label: 'No barred field in the fit',
      holds: barred.length === 0,
      detail: barred.length === 0 ? permittedDetail(specification) : barred.map(({ column }) => barredWords(column)).join(' '),
      path: `${model}/fit/${version.fitId}`,
    },
    {
      code: 'trends-justified',
      label: 'Trends that are not monotone are justified',
      holds: turning.length === 0 || (texts.trendExceptions ?? '').trim().length > 0,
      detail:
        turning.length === 0
          ? 'Along every numeric characteristic kept, WOE only rises or only falls.'
          : `WOE rises and falls along: ${turning.join(', ')}. Justify it in the text on trends that are not monotone, or class anew.`,
      path: `${model}/version/${version.id}`,
    },
    {
      code: 'signs-justified',
      label: 'Sign exceptions are justified',
      holds: against.length === 0 || (texts.signExceptions ?? '').trim().length > 0,
      detail:
        against.length === 0
          ? 'Every coefficient runs with WOE.'
          : `Against WOE: ${against.map(({ column }) => column).join(', ')}. Justify them in the text on sign exceptions.`,
      path: `${model}/version/${version.id}`,
    },
    {
      code: 'reason-texts',
      label: 'A reason text for each characteristic kept',
      holds: untold.length === 0,
      detail: untold.length === 0 ? `All ${kept.length} have one.` : `Without a text: ${untold.map(({ column }) => column).join(', ')}. They belong to the scorecard; freeze it again with them.`,
      path: `${model}/scorecard?fit=${version.fitId}`,
    },
    {
      code: 'monitoring-plan',
      label: 'Monitoring plan present',
      holds: (texts.monitoringPlan ?? '').trim().length > 0,
      detail: (texts.monitoringPlan ?? '').trim().length > 0 ? 'Written.' : 'Say what is watched, how often, and what triggers a redevelopment.',
      path: `${model}/version/${version.id}`,
    },
  ];
}

/** Rows of the file = excluded + declined + the three partitions + rows that no partition takes. Nothing may be left over or counted twice. */
export function reconciled({ counts }: Pick<Result, 'counts'>, fileRows: number): { holds: boolean; detail: string } {
  const excluded = counts.excluded.reduce((sum, { rows: taken }) => sum + taken, 0);
  const parts = counts.development.rows + counts.holdOut.rows + counts.outOfTime.rows;
  const sum = excluded + counts.declined + parts;
  const words = `${excluded} excluded + ${counts.declined} declined + ${parts} in the partitions = ${sum} of ${fileRows} rows`;
  return sum === fileRows ? { holds: true, detail: `${words}.` } : { holds: false, detail: `${words}: ${Math.abs(fileRows - sum)} rows are not accounted for.` };
}

/** Those frozen with the version: what the second signature is asked to stand for. */
function permittedDetail(specification: Specification): string {
  const lines = permissionLines(specification);
  return lines.length === 0 ? 'No protected column takes part.' : `${lines.join('. ')}.`;
}

function concludeItems({ version, replications, matchingReplications }: Looked): GateItem[] {
  return [
    {
      code: 'replication-matches',
      label: 'A replication by someone who did not develop it is recorded and matches',
      holds: matchingReplications > 0,
      detail:
        matchingReplications > 0
          ? `${matchingReplications} of ${replications} recorded.`
          : version.erased
            ? `${replications === 0 ? 'None is recorded.' : `${replications} recorded, none of them both independent and matching.`} ${noLongerReplicable(version.erased)}`
            : replications === 0
            ? 'None is recorded. Replicate from the stored raw file.'
            : `${replications} recorded, none of them both independent and matching. Replicate, and look at what differs.`,
      path: version.erased && matchingReplications === 0 ? null : `/models/${version.modelId}/validation/${version.id}`,
    },
  ];
}

function acceptItems({ version, texts }: Looked): GateItem[] {
  const empty = authorsTexts.filter(([key]) => !(texts[key] ?? '').trim());
  return [
    {
      code: 'concluded',
      label: 'The validator has concluded',
      holds: version.concluded,
      detail: version.concluded ? 'First signature given.' : 'The first signature is missing.',
      path: `/models/${version.modelId}/validation/${version.id}`,
    },
    {
      code: 'texts-filled',
      label: 'The author’s sections are filled',
      holds: empty.length === 0,
      detail: empty.length === 0 ? 'All are written.' : `Empty: ${empty.map(([, label]) => label).join('; ')}.`,
      path: `/models/${version.modelId}/version/${version.id}`,
    },
  ];
}
