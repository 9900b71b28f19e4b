import type { Bins } from '@tallystone/contracts/binnings/bins';
import type { BinningHistory } from '@tallystone/contracts/binnings/schema';
import { moment, plural, written } from '../../../ui/numbers';
import { notCarriedWords } from './edit-words';

/** An edit in the history of a binning, in words. */

type HistoricEdit = BinningHistory['edits'][number];

/** One sentence over the history: how many edits are in effect, and whether each says why. */
export function historyFinding(edits: readonly HistoricEdit[]): string {
  if (edits.length === 0) return 'The bins are as they were classed automatically.';
  const now = edits.filter(({ inEffect }) => inEffect);
  if (now.length === 0) return `No edit by hand is in effect, of ${edits.length} in the history.`;
  const open = now.filter(({ reason }) => reason === null).length;
  const why = open === 0 ? 'each with its reason' : `${open} without a reason yet`;
  return `${plural(now.length, 'edit')} of ${edits.length} ${now.length === 1 ? 'is' : 'are'} in effect, ${why}.`;
}

export function stateWords({ inEffect, notCarried, carriedFrom, ended }: HistoricEdit): string {
  if (notCarried !== null) return 'not carried over';
  if (!inEffect) return ended?.how ?? 'no longer in effect';
  return carriedFrom ? `carried over from ${carriedFrom.binning}` : 'in effect';
}

/** Who took the edit back, when and why; why it could not be carried over; nothing for one in effect. */
export function endWords(edit: HistoricEdit): string | null {
  const { notCarried, ended } = edit;
  if (notCarried !== null) return notCarriedWords(edit);
  if (!ended) return null;
  return `${ended.by}, ${moment(ended.at)}${ended.reason ? `: ${ended.reason}` : ''}`;
}

/**
 * What an edit changed, before and after in one line each: the cuts or groups where they changed, else the place of what was moved.
 * @example changeWords({ before: { kind: 'numeric', edges: [20, 40], … }, after: { kind: 'numeric', edges: [20, 45], … } }).after // '20 | 45'
 */
export function changeWords({ before, after }: { readonly before: Bins; readonly after: Bins }): {
  before: string;
  after: string;
} {
  const [from, to] = [boundsWords(before), boundsWords(after)];
  if (from !== to) return { before: from, after: to };
  const [left, right] = [placesOf(before), placesOf(after)];
  const changed = left.flatMap((place, index) => (place === right[index] ? [] : [index]));
  const pick = (places: readonly string[]): string => changed.map((index) => places[index]).join('; ');
  return { before: pick(left), after: pick(right) };
}

function boundsWords(bins: Bins): string {
  if (bins.kind === 'categorical') return bins.groups.map((group) => group.join(', ')).join(' | ');
  return bins.edges.length === 0 ? 'no cut' : bins.edges.map(written).join(' | ');
}

function placesOf(bins: Bins): string[] {
  const place = (where: 'own' | 'neutral' | number): string =>
    where === 'own' ? 'in a bin of its own' : where === 'neutral' ? 'neutral' : `in bin ${where + 1}`;
  return [
    ...bins.special.map((where, code) => `special code ${code + 1} ${place(where)}`),
    `missing ${place(bins.missing)}`,
    ...(bins.kind === 'categorical' ? [`unseen ${place(bins.unseen)}`] : []),
  ];
}
