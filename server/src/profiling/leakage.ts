import type { ColumnFlag } from '@tallystone/contracts/samples/columns';
import { weightOfEvidence } from '@tallystone/numeric';
import { type NumberReader } from '../reading/index';
import type { TextColumn } from '../replay/source';

/** Per row: 1 good, 0 bad, anything else neither. */
export type OutcomeCodes = Uint8Array;

/** Above this an information value asks whether the column was known at application (Siddiqi 2006, from memory; common practice). */
export const leakageValue = 0.5;
const groups = 20;

/**
 * Whether a column predicts the outcome far too well for something known at application. Information value over about twenty groups of
 * equal size (numbers) or over the categories, missing in a group of its own; smoothed by 0.5 where a group lacks one class.
 */
export function suspectLeakage(
  column: TextColumn,
  isMissing: (text: string) => boolean,
  outcome: OutcomeCodes,
  reader: NumberReader | null,
): ColumnFlag | null {
  const goods = new Float64Array(column.texts.length);
  const bads = new Float64Array(column.texts.length);
  column.codes.forEach((code, row) => {
    if (outcome[row] === 1) goods[code]++;
    else if (outcome[row] === 0) bads[code]++;
  });
  return judgeGroups(groupTexts(column.texts, isMissing, goods, bads, reader));
}

/** Goods and bads of some distinct values. */
export interface OutcomeCounts {
  readonly length: number;
  readonly goods: ArrayLike<number>;
  readonly bads: ArrayLike<number>;
}

/** The same from counts: of numbers ascending, then of the texts that are none. */
export function leakageOfNumbers(known: readonly OutcomeCounts[], missing: { goods: number; bads: number }): ColumnFlag | null {
  return judgeGroups([...(missing.goods + missing.bads > 0 ? [missing] : []), ...groupsOfEqualSize(known)]);
}

function judgeGroups(grouped: readonly { goods: number; bads: number }[]): ColumnFlag | null {
  const total = (key: 'goods' | 'bads'): number => grouped.reduce((sum, group) => sum + group[key], 0);
  if (total('goods') === 0 || total('bads') === 0 || grouped.length < 2) return null;
  const { informationValue } = weightOfEvidence(
    grouped.map((group) => group.goods),
    grouped.map((group) => group.bads),
    { amount: 0.5, when: 'zero-cell' },
  );
  if (informationValue <= leakageValue) return null;
  return {
    code: 'possible-leakage',
    weight: 'look',
    finding: `Information value ${informationValue.toFixed(2)} against the suggested outcome: it predicts very well. Was it known when the application was decided?`,
  };
}

function groupTexts(
  texts: readonly string[],
  isMissing: (text: string) => boolean,
  goods: Float64Array,
  bads: Float64Array,
  reader: NumberReader | null,
): { goods: number; bads: number }[] {
  const missing = { goods: 0, bads: 0 };
  const known: { value: number; goods: number; bads: number }[] = [];
  texts.forEach((text, place) => {
    if (goods[place] + bads[place] === 0) return;
    if (isMissing(text)) {
      missing.goods += goods[place];
      missing.bads += bads[place];
      return;
    }
    known.push({ value: reader ? reader.read(text) : place, goods: goods[place], bads: bads[place] });
  });
  const result: { goods: number; bads: number }[] = missing.goods + missing.bads > 0 ? [missing] : [];
  if (!reader) {
    // Many rare categories would each fit the outcome by chance: the rare ones are one group.
    const rows = known.reduce((sum, one) => sum + one.goods + one.bads, 0);
    const rare = { goods: 0, bads: 0 };
    for (const one of known) {
      if (one.goods + one.bads >= rows / 100) result.push(one);
      else {
        rare.goods += one.goods;
        rare.bads += one.bads;
      }
    }
    if (rare.goods + rare.bads > 0) result.push(rare);
    return result;
  }
  const order = (value: number): number => (Number.isNaN(value) ? 1 : 0);
  known.sort((a, b) => order(a.value) - order(b.value) || (Number.isNaN(a.value) ? 0 : a.value - b.value));
  const sorted = { length: known.length, goods: known.map((one) => one.goods), bads: known.map((one) => one.bads) };
  return [...result, ...groupsOfEqualSize([sorted])];
}

function groupsOfEqualSize(known: readonly OutcomeCounts[]): { goods: number; bads: number }[] {
  let size = 0;
  for (const { length, goods, bads } of known) for (let place = 0; place < length; place++) size += goods[place] + bads[place];
  size /= groups;
  const result: { goods: number; bads: number }[] = [];
  let group = { goods: 0, bads: 0 };
  for (const { length, goods, bads } of known) {
    for (let place = 0; place < length; place++) {
      if (goods[place] + bads[place] === 0) continue;
      group.goods += goods[place];
      group.bads += bads[place];
      if (group.goods + group.bads >= size) {
        result.push(group);
        group = { goods: 0, bads: 0 };
      }
    }
  }
  if (group.goods + group.bads > 0) result.push(group);
  return result;
}
