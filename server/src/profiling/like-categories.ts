import type { ColumnFlag } from '@tallystone/contracts/samples/columns';
import { type Counted, thin } from './kind';

/** A column of more different texts holds no categories. */
const mostCategories = 10_000;
const mostShown = 3;

/** Case, blanks around it, and what stands between two words; signs at an end may mean something (A+, A-). */
const plainForm = (text: string): string =>
  text
    .normalize('NFKC')
    .trim()
    .toLowerCase()
    .replace(/(?<=\p{L})[\s._/-]+(?=\p{L})/gu, ' ')
    .replace(/\s+/gu, ' ');

/**
 * Says where categories differ only in how they are written: each would be a category of its own, and in production an unseen one where the other
 * was meant. Null where none do.
 *
 * @param values different texts that are not missing, with their rows
 */
export function likeCategories(values: readonly Counted[]): ColumnFlag | null {
  if (values.length > mostCategories) return null;
  const byForm = new Map<string, Counted[]>();
  for (const one of values) {
    const form = plainForm(one.text);
    const group = byForm.get(form);
    if (group) group.push(one);
    else byForm.set(form, [one]);
  }
  const rowsOf = (group: readonly Counted[]): number => group.reduce((sum, { count }) => sum + count, 0);
  const alike = [...byForm.values()].filter(({ length }) => length > 1).sort((a, b) => rowsOf(b) - rowsOf(a));
  if (alike.length === 0) return null;
  const shown = alike.slice(0, mostShown).map((group) =>
    [...group]
      .sort((a, b) => b.count - a.count || (a.text < b.text ? -1 : 1))
      .slice(0, mostShown)
      .map(({ text, count }) => `“${text.slice(0, 40)}” (${thin(count)})`)
      .join(' and '),
  );
  const more = alike.length > mostShown ? `; and ${alike.length - mostShown} more` : '';
  const finding = `Categories that differ only in case or in blanks and signs between words: ${shown.join('; ')}${more}. Each is a category of its own; group them when binning, or write them in one way in the file.`;
  return { code: 'like-categories', weight: 'look', finding };
}
