import type { GroupsBy } from '@tallystone/contracts/specification/types';
import type { TextColumn } from './source';

/**
 * The groups of a column in an order of their own, and what each is drawn by. By value, the order of rows in the file never matters. By first row (numbered
 * from 1, whichever rows take part), the value never does, so that a column of hashes gives the groups that the file gives.
 *
 * @param present codes of the groups that take part
 */
export function orderOfGroups(
  present: Iterable<number>,
  { codes, texts }: TextColumn,
  by: GroupsBy = 'value',
): { groups: number[]; nameOf: (code: number) => string | number } {
  if (by === 'value')
    return { groups: [...present].sort((a, b) => (texts[a] < texts[b] ? -1 : 1)), nameOf: (code) => texts[code] };
  const first = new Int32Array(texts.length);
  for (let row = codes.length - 1; row >= 0; row--) first[codes[row]] = row + 1;
  return { groups: [...present].sort((a, b) => first[a] - first[b]), nameOf: (code) => first[code] };
}
