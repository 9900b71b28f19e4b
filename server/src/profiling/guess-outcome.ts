import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { DraftOutcome } from '@tallystone/contracts/samples/definition';
import type { TextColumn } from '../replay/source';
import type { OutcomeCodes } from './leakage';

const badWords = /^(bad|b|default|defaulted|d|delinquent|charged[ _-]?off|write[ _-]?off)$/i;
const goodWords = /^(good|g|paid|performing|current|non[ _-]?default|ok)$/i;
const indeterminateWords = /^(indeterminate|i|ind|grey|gray)$/i;

/** "non_default", "not bad": who says what is denied has not said what 1 is. */
const denied = /(?:^|[^a-z])(?:no|non|not|never|without)[ _-]?(?:bad|default)/i;

/**
 * A first mapping of an outcome's values, by what they say; values that say nothing are left for the person. 1 and 0 follow the heading:
 * in a column called "bad" 1 is bad, in one called "good" it is good; in one called "non_default" it is for the person to say.
 */
export function proposeOutcome(profile: ColumnProfile): DraftOutcome {
  const proposed: DraftOutcome = { good: [], bad: [], indeterminate: [], excluded: [] };
  const ones = denied.test(profile.column) ? null : /bad|default|target/i.test(profile.column) ? 'bad' : /^good$/i.test(profile.column) ? 'good' : null;
  for (const { value } of profile.mostFrequent) {
    if (badWords.test(value)) proposed.bad.push(value);
    else if (goodWords.test(value)) proposed.good.push(value);
    else if (indeterminateWords.test(value)) proposed.indeterminate.push(value);
    else if (ones && value === '1') proposed[ones].push(value);
    else if (ones && value === '0') proposed[ones === 'bad' ? 'good' : 'bad'].push(value);
  }
  return proposed;
}

/** The suggested outcome per row for the check on leakage; null where no column suggests itself or its values say nothing. */
export async function guessOutcome(
  profiles: readonly ColumnProfile[],
  read: (position: number) => Promise<TextColumn>,
): Promise<OutcomeCodes | null> {
  const profile = profiles.find(({ suggestedRole }) => suggestedRole === 'outcome');
  if (!profile) return null;
  const { good, bad } = proposeOutcome(profile);
  if (good.length === 0 || bad.length === 0) return null;
  const column = await read(profile.position);
  const byText = Uint8Array.from(column.texts, (text) => (good.includes(text) ? 1 : bad.includes(text) ? 0 : 255));
  return Uint8Array.from(column.codes, (code) => byText[code]);
}
