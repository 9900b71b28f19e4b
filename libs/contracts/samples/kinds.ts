import type { ColumnProfile } from './columns';
import type { ColumnKind } from './reading';

/**
 * Whether the values of a column, as it was read, can be taken to be of this kind. Anything can be categories; numbers may have codes in words among
 * them, so many even that reading takes them for categories.
 *
 * @example canBe('categorical', profile) // true, unless the column is kept as keyed hashes
 */
export function canBe(kind: ColumnKind, profile: Pick<ColumnProfile, 'kind' | 'flags' | 'hashed'>): boolean {
  if (kind === profile.kind) return true;
  if (profile.hashed || kind === 'date') return false;
  return (
    kind === 'categorical' ||
    profile.flags.some(({ code, values }) => code === 'numbers-as-text' && values !== undefined && values.length > 0)
  );
}
