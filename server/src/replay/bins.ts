import type { BinnedCharacteristic, Characteristic } from '@tallystone/contracts/specification/types';
import type { Bin } from './types';

/** The bins of a characteristic in order: cuts or groups, then own specials as listed, then missing if own. Linear: none. */
export function binsOf(characteristic: Characteristic): Bin[] {
  if (characteristic.coding === 'linear') return [];
  const bins: Bin[] =
    characteristic.kind === 'numeric'
      ? cutLabels(characteristic.edges, characteristic.closed).map((label) => ({ label, kind: 'cut' }))
      : characteristic.groups.map((group) => ({ label: group.join(', '), kind: 'group' }));
  for (const special of characteristic.special) if (special.bin === 'own') bins.push({ label: special.label, kind: 'special' });
  if (characteristic.missing === 'own') bins.push({ label: 'missing', kind: 'missing' });
  return bins;
}

/**
 * Labels of the bins that cuts make.
 * @example cutLabels([25, 30], 'left') // ['under 25', '25 to under 30', '30 and over']
 * @example cutLabels([25, 30], 'right') // ['up to 25', 'over 25 to 30', 'over 30']
 */
export function cutLabels(edges: readonly number[], closed: 'left' | 'right'): string[] {
  if (edges.length === 0) return ['all values'];
  const left = closed === 'left';
  const first = left ? `under ${edges[0]}` : `up to ${edges[0]}`;
  const middle = edges
    .slice(1)
    .map((edge, index) => (left ? `${edges[index]} to under ${edge}` : `over ${edges[index]} to ${edge}`));
  const last = edges[edges.length - 1];
  return [first, ...middle, left ? `${last} and over` : `over ${last}`];
}

/** Bins made by cuts or groups alone: the indices that specials, missing and unseen can join. */
export function regularBins(characteristic: BinnedCharacteristic): number {
  return characteristic.kind === 'numeric' ? characteristic.edges.length + 1 : characteristic.groups.length;
}

/** The bin of each special value list, and of missing (null = refused). */
export function joins(characteristic: BinnedCharacteristic): { special: number[]; missing: number | null } {
  let next = regularBins(characteristic);
  const special = characteristic.special.map((entry) => (entry.bin === 'own' ? next++ : entry.bin));
  const { missing } = characteristic;
  return { special, missing: missing === 'refuse' ? null : missing === 'own' ? next : missing };
}
