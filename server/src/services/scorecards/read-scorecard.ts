import type { Scorecard, ScorecardCharacteristic } from '@tallystone/contracts/scorecards/schema';
import type { PartitionName } from '@tallystone/contracts/result/types';
import { type Points, scaleToPoints } from '@tallystone/numeric';
import type { Sequelize } from 'sequelize';
import type { Actor } from '../../models/person';
import { abilitiesOnScorecard } from '../../policies/scorecards';
import type { BuiltScorecard } from '../../threads/build-scorecard';
import { runInThread } from '../../threads/run-in-thread';
import type { FoundFit } from '../fits/find-fit';
import { outOfTimeState } from '../out-of-time/cover';
import { findDefinition } from '../samples/definitions';
import { loadColumns } from '../samples/load-columns';
import { type LoadedScorecard, loadScorecard } from './load-scorecard';

export const pointsOfScorecard = ({ settings, intercept, kept }: LoadedScorecard): Points =>
  scaleToPoints(settings.scaling, { intercept, terms: kept.map(({ coefficient, bins }) => ({ coefficient, woe: bins.map((bin) => bin.woe) })) });

/** What the scorecard is on the sample's rows. Out-of-time takes part only once opened. */
export async function buildOnRows(sequelize: Sequelize, fit: FoundFit, loaded: LoadedScorecard): Promise<BuiltScorecard & { state: 'none' | 'covered' | 'opened' }> {
  const [definition, state] = await Promise.all([findDefinition(sequelize, fit.definitionId), outOfTimeState(sequelize, fit.definitionId)]);
  if (!definition) throw new Error(`Fit ${fit.id} has no sample definition`);
  const { rows, columns } = await loadColumns(sequelize, definition.sampleId, loaded.scoring);
  const partitions: PartitionName[] = state === 'opened' ? ['development', 'holdOut', 'outOfTime'] : ['development', 'holdOut'];
  const built = await runInThread('scorecard.build', {
    specification: loaded.scoring,
    rows,
    columns,
    intercept: loaded.intercept,
    coefficients: loaded.kept.map(({ coefficient }) => coefficient),
    woe: loaded.kept.map(({ bins }) => bins.map((bin) => bin.woe)),
    partitions,
  });
  return { ...built, state };
}

/** What stays where the rows are gone: points hang on bins and coefficients alone, everything counted by score does not. */
async function withoutRows(sequelize: Sequelize, fit: FoundFit) {
  return { bands: [], distribution: null, smallestScore: null, largestScore: null, rounding: null, state: await outOfTimeState(sequelize, fit.definitionId) };
}

async function countedOnRows(sequelize: Sequelize, fit: FoundFit, loaded: LoadedScorecard) {
  const { meanPointsAtCutOff: _used, ...built } = await buildOnRows(sequelize, fit, loaded);
  return built;
}

/** @throws Problem 409 while no penalty is chosen */
export async function readScorecard(sequelize: Sequelize, fit: FoundFit, person: Actor, known?: LoadedScorecard): Promise<Scorecard> {
  const loaded = known ?? (await loadScorecard(sequelize, fit));
  const points = pointsOfScorecard(loaded);
  const { state, ...built } = fit.erased ? await withoutRows(sequelize, fit) : await countedOnRows(sequelize, fit, loaded);
  const choice = fit.choice!;
  return {
    fitId: fit.id,
    modelId: fit.modelId,
    fitName: fit.name,
    choice: { id: choice.id, index: choice.place, lambda: choice.lambda, rule: choice.rule },
    settings: loaded.settings,
    revision: loaded.revision,
    intercept: loaded.intercept,
    factor: points.factor,
    offset: points.offset,
    basePoints: points.basePoints,
    basePointsRounded: points.basePointsRounded,
    form: points.form,
    characteristics: loaded.kept.map(
      ({ definition, label, coefficient, informationValue, bins }, k): ScorecardCharacteristic => ({
        column: definition.column,
        label,
        kind: definition.kind,
        coefficient,
        informationValue,
        bins: bins.map((bin, i) => ({ ...bin, points: points.points[k][i], pointsRounded: points.pointsRounded[k][i] })),
        neutral: points.neutral[k],
      }),
    ),
    ...built,
    outOfTimeState: state,
    erased: fit.erased,
    againstWoe: loaded.kept.filter(({ coefficient }) => coefficient < 0).map(({ definition }) => definition.column),
    abilities: abilitiesOnScorecard(person, fit),
  };
}
