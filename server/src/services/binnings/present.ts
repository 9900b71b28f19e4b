import type {
  Binning,
  BinningSummary,
  CharacteristicDetail,
  CharacteristicList,
  CharacteristicSummary,
} from '@tallystone/contracts/binnings/schema';
import type { OutOfTimeState } from '@tallystone/contracts/out-of-time/schema';
import { openingWords } from '@tallystone/contracts/out-of-time/opening-words';
import type { Sequelize, Transaction } from 'sequelize';
import { binsOfEntry } from '../../classing/definition';
import type { Actor } from '../../models/person';
import { abilitiesOnBinning, canEditBinning } from '../../policies/binnings';
import { outOfTimeState } from '../out-of-time/cover';
import { openingsOver } from '../out-of-time/openings';
import { groupOf, groupsWithStanding } from './correlations';
import { editsInEffect, editsNotCarried, presentEdit } from './edits';
import type { FoundBinning } from './find-binning';
import { type ListedCharacteristic, type OnBench, listCharacteristics } from './find-characteristic';

export function presentBinningSummary({
  model: _model,
  constraints: _constraints,
  barred: _barred,
  problem: _problem,
  createdAt,
  ...rest
}: FoundBinning): BinningSummary {
  return { ...rest, createdAt: createdAt.toISOString() };
}

export async function presentBinning(
  sequelize: Sequelize,
  person: Actor,
  binning: FoundBinning,
  tx: Transaction | null = null,
): Promise<Binning> {
  return {
    ...presentBinningSummary(binning),
    constraints: binning.constraints,
    barred: binning.barred,
    problem: binning.problem,
    outOfTime: await outOfTimeState(sequelize, binning.definitionId, tx),
    outOfTimeOpenings: openingWords(await openingsOver(sequelize, binning.definitionId, tx)),
    abilities: abilitiesOnBinning(person, binning),
  };
}

function presentSummary(one: ListedCharacteristic, outOfTime: OutOfTimeState, group: number | null): CharacteristicSummary {
  const { summary, outOfTimeWarnings, outOfTimeCsi, ...rest } = one;
  const { csiHoldOut, monthlyDrift, informationValueLower, informationValueUpper, ...figures } = summary;
  const opened = outOfTime === 'opened';
  return {
    id: rest.id,
    column: rest.column,
    kind: rest.kind,
    position: rest.position,
    included: rest.included,
    leftOutReason: rest.leftOutReason,
    ...figures,
    // Bins that are older than these have them once the run that completes them is through.
    informationValueLower: informationValueLower ?? null,
    informationValueUpper: informationValueUpper ?? null,
    stability: { holdOut: csiHoldOut ?? null, outOfTime: opened ? outOfTimeCsi : null, byMonth: monthlyDrift ?? null },
    group,
    warnings: opened ? [...summary.warnings, ...outOfTimeWarnings] : summary.warnings,
    edits: rest.edits,
    editsWithoutReason: rest.editsWithoutReason,
    notCarried: rest.notCarried,
    revision: rest.revision,
  };
}

export async function presentCharacteristics(
  sequelize: Sequelize,
  binning: FoundBinning,
  tx: Transaction | null = null,
): Promise<CharacteristicList> {
  const outOfTime = await outOfTimeState(sequelize, binning.definitionId, tx);
  const { groups, standing } = await groupsWithStanding(sequelize, binning.id, tx);
  const characteristics = (await listCharacteristics(sequelize, binning.id, tx)).map((one) =>
    presentSummary(one, outOfTime, groups.get(one.id) ?? null),
  );
  return { characteristics, finding: findingOf(characteristics), correlations: standing };
}

/** The one sentence over the list: the first of these that has something to say. */
export function findingOf(all: readonly CharacteristicSummary[]): string {
  const included = all.filter((one) => one.included);
  if (included.length === 0) return all.length === 0 ? 'Nothing has been classed yet.' : 'Every characteristic is left out.';
  const suspects = included.filter((one) => one.warnings.some(({ code }) => code === 'high-information-value'));
  const telling = included.filter((one) => one.reading === 'strong' || one.reading === 'medium').length;
  const strength = `${telling} of ${count(included.length, 'characteristic')} ${telling === 1 ? 'reads' : 'read'} medium or strong`;
  if (suspects.length > 0) {
    const names = suspects.slice(0, 3).map(({ column }) => column);
    return `${strength}; ${names.join(', ')}${suspects.length > 3 ? ` and ${suspects.length - 3} more` : ''} ${suspects.length === 1 ? 'predicts' : 'predict'} so well that leakage must be ruled out.`;
  }
  const looks = included.filter((one) => one.warnings.length > 0).length;
  return looks > 0 ? `${strength}; ${looks} ${looks === 1 ? 'asks' : 'ask'} for a look.` : `${strength}, none with a warning.`;
}

const count = (number: number, noun: string): string => `${number} ${noun}${number === 1 ? '' : 's'}`;

export async function presentDetail(
  sequelize: Sequelize,
  person: Actor,
  { binning, characteristic }: OnBench,
  tx: Transaction | null = null,
): Promise<CharacteristicDetail> {
  const outOfTime = await outOfTimeState(sequelize, binning.definitionId, tx);
  const group = await groupOf(sequelize, { binningId: binning.id, characteristicId: characteristic.id }, tx);
  const { definition, automatic, constraints, fine, changedBy, changedAt } = characteristic;
  return {
    ...presentSummary(characteristic, outOfTime, group),
    definition,
    current: binsOfEntry(definition, fine.pooled),
    automatic,
    constraints,
    fine: { ...fine, outOfTime: outOfTime === 'opened' ? characteristic.outOfTime : null },
    editList: (await editsInEffect(sequelize, characteristic.id, tx)).map(presentEdit),
    notCarriedList: (await editsNotCarried(sequelize, characteristic.id, tx)).map(presentEdit),
    changedBy,
    changedAt: changedAt.toISOString(),
    abilities: canEditBinning(person, binning).allowed ? ['edit'] : [],
  };
}
