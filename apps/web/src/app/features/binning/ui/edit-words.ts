import type { EditKind } from '@tallystone/contracts/binnings/edits';
import type { Bins } from '@tallystone/contracts/binnings/bins';
import type { Bins as BenchBins } from '@tallystone/numeric/bench';
import { binWords, valueWords } from '../../../ui/numbers';

/** What is needed of an edit to write its sentence. */
export interface SaidEdit {
  readonly kind: EditKind;
  readonly what: string;
  readonly before: Bins | BenchBins;
}

/** Sentences in which there is nothing but values and words of the product. */
const ofValues: readonly EditKind[] = ['cut moved', 'cut added', 'bins merged', 'bin split'];
const joined = ' joined to ';

/**
 * The sentence of an edit with its numbers as they are read; stored are plain ones. Names of categories and of special codes stay as they are.
 * @example editWords({ kind: 'cut moved', what: 'Cut moved from 18762.23 to 19000', … }) // 'Cut moved from 18 762.23 to 19 000'
 */
export function editWords({ kind, what, before }: SaidEdit): string {
  if (before.kind === 'categorical') return what;
  if (ofValues.includes(kind) || what.startsWith('Cuts as they were: ')) return valueWords(what);
  const at = what.lastIndexOf(joined);
  return at < 0 ? what : what.slice(0, at + joined.length) + binWords(what.slice(at + joined.length));
}

/** Why an edit of an earlier binning was not carried over, with its numbers as they are read. */
export const notCarriedWords = ({
  kind,
  before,
  notCarried,
}: SaidEdit & { readonly notCarried: string | null }): string | null =>
  notCarried !== null && before.kind === 'numeric' && ofValues.includes(kind) ? valueWords(notCarried) : notCarried;
