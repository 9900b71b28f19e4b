import type { DefinedColumn } from '@tallystone/contracts/samples/definition';
import type { Specification } from '@tallystone/contracts/specification/types';

/**
 * Whether every special code that the sample's definition states for a characteristic has its bin in the specification. A code that lost it would be
 * read as an ordinary value: -999 as a very small one.
 */
export function specialsMapped(
  { characteristics }: Pick<Specification, 'characteristics'>,
  columns: readonly Pick<DefinedColumn, 'column' | 'special'>[],
): { holds: boolean; detail: string } {
  const mapped: string[] = [];
  const unmapped: string[] = [];
  for (const entry of characteristics) {
    const stated = columns.find(({ column }) => column === entry.column)?.special ?? [];
    const known = new Set(entry.coding === 'linear' ? [] : entry.special.flatMap(({ values }) => values.map(String)));
    for (const { label, values } of stated) {
      const missing = values.map(String).filter((value) => !known.has(value));
      if (missing.length === 0) mapped.push(`${entry.column}: ${label}`);
      else unmapped.push(`${entry.column}: ${label} (${missing.join(', ')})`);
    }
  }
  if (unmapped.length > 0)
    return { holds: false, detail: `Stated and without a bin: ${listed(unmapped)}. Class these characteristics anew.` };
  return {
    holds: true,
    detail: mapped.length === 0 ? 'The sample states no special codes.' : `Each has a bin: ${listed(mapped)}.`,
  };
}

const listed = (names: readonly string[]): string =>
  `${names.slice(0, 6).join('; ')}${names.length > 6 ? ` and ${names.length - 6} more` : ''}`;
