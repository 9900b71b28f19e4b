import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { CountedNumber } from './profile-column';
import { thin } from './kind';

/**
 * Numbers that may be codes ("no bureau record") rather than amounts: repeated, at the end of the range, and either written in nines or
 * far from everything else. Suspicions for a person to settle; nothing is treated as a code on its own.
 */
export function suspectSpecials(numbers: readonly CountedNumber[]): ColumnProfile['specialSuspects'] {
  const rows = numbers.reduce((total, { count }) => total + count, 0);
  const enough = Math.max(5, rows * 0.0005);
  const suspects: ColumnProfile['specialSuspects'] = [];
  const consider = (end: 'smallest' | 'largest'): void => {
    const rest = [...numbers];
    for (let round = 0; round < 5; round++) {
      const one = end === 'smallest' ? rest.shift() : rest.pop();
      // Codes come in runs (9997, 9998, 9999): the distance that counts is that to the nearest value of another kind.
      const others = one ? rest.filter(({ value }) => Math.abs(value - one.value) > 3) : [];
      if (!one || one.count < enough || others.length === 0) return;
      const next = end === 'smallest' ? others[0].value : others[others.length - 1].value;
      const spread = others[others.length - 1].value - others[0].value;
      const gap = Math.abs(next - one.value);
      const nines = /^-?(9+[6-9]|8{3,})(\.0+)?$/.test(one.text);
      const negative = one.value < 0 && Number.isInteger(one.value) && rest.every(({ value }) => value >= 0 || isCodeLike(value));
      const far = gap > spread * 0.5 && isCodeLike(one.value);
      // Among few values only what is written like a code can be told from a scale.
      const few = others.length < 7;
      if (few ? !(negative && nines) : !(nines || negative || far)) return;
      // A run of whole numbers that simply ends at 99 is a range, not a code.
      if (nines && !negative && gap <= Math.max(1, spread * 0.05)) return;
      const reason = negative
        ? 'negative where every other value is not'
        : nines
          ? 'written in nines at the end of the range'
          : 'far from every other value';
      suspects.push({ value: one.text, count: one.count, reason: `${thin(one.count)} times, ${reason}.` });
    }
  };
  consider('smallest');
  consider('largest');
  // Written in nines and as frequent as no amount is, wherever it lies among them.
  for (const { value, text, count } of numbers) {
    const known = suspects.some((suspect) => suspect.value === text);
    if (known || numbers.length < 50 || value >= 0 || !/^-9{1,}[6-9](\.0+)?$/.test(text) || count < 0.02 * rows) continue;
    suspects.push({
      value: text,
      count,
      reason: `${thin(count)} times, written in nines and far more frequent than any amount beside it.`,
    });
  }
  return suspects;
}

/** Spelled as people spell codes: 99, 888, 7777, 9000, -1 to -9. */
function isCodeLike(value: number): boolean {
  if (!Number.isInteger(value)) return false;
  return (value < 0 && value >= -9) || /^-?(9+[6-9]|9{2,}|8{2,}|7{2,}|1{3,}|\d0{3,})$/.test(String(value));
}
