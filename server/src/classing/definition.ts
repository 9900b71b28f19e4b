import type { AskedConstraints, Bins, Constraints, Fine } from '@tallystone/contracts/binnings/bins';
import type { BinnedCharacteristic, Classing } from '@tallystone/contracts/specification/types';

/**
 * The bins of a specification entry: what classing and edits decide.
 *
 * @param pooled of the fine classes: its name stands for all of its categories, as it does on the bench; each stands for itself where it is left out
 */
export function binsOfEntry(entry: BinnedCharacteristic, pooled?: Fine['pooled']): Bins {
  const special = entry.special.map(({ bin }) => bin);
  const missing = entry.missing === 'refuse' ? 'own' : entry.missing;
  return entry.kind === 'numeric'
    ? { kind: 'numeric', edges: [...entry.edges], special, missing }
    : { kind: 'categorical', groups: entry.groups.map((group) => collapsed(group, pooled)), special, missing, unseen: entry.unseen };
}

/** Pooled categories are all in one group. */
function collapsed(group: readonly string[], pooled: Fine['pooled']): string[] {
  if (!pooled || !group.includes(pooled.categories[0])) return [...group];
  const all = new Set(pooled.categories);
  return [...group.filter((category) => !all.has(category)), pooled.name];
}

/**
 * The entry with other bins; everything else stays as it is.
 *
 * @param pooled of the fine classes that the bins are made of: a specification lists each of its categories
 */
export function withBins(entry: BinnedCharacteristic, bins: Bins, classing: Classing, pooled?: Fine['pooled']): BinnedCharacteristic {
  if (entry.kind === 'numeric' && bins.kind === 'numeric') {
    const special = entry.special.map((code, index) => ({ ...code, bin: bins.special[index] }));
    return { ...entry, edges: [...bins.edges], special, missing: bins.missing, classing };
  }
  if (entry.kind === 'categorical' && bins.kind === 'categorical') {
    const special = entry.special.map((code, index) => ({ ...code, bin: bins.special[index] }));
    return {
      ...entry,
      groups: bins.groups.map((group) => group.flatMap((category) => (category === pooled?.name ? pooled.categories : [category]))),
      special,
      missing: bins.missing,
      unseen: bins.unseen,
      classing,
    };
  }
  throw new Error(`"${entry.column}" is ${entry.kind} and cannot have ${bins.kind} bins`);
}

/** The largest information value is what a specification means when it says nothing, so it says nothing. */
export function automaticClassing({ criterion, ...constraints }: Constraints): Classing {
  return { made: 'automatic', ...constraints, ...(criterion === 'deviance' ? { criterion } : {}) };
}

/** What was asked for when a characteristic was classed under these constraints: a trend that was chosen is to be chosen again. */
export function askedAgain({ trendBy, ...constraints }: Constraints): AskedConstraints {
  return trendBy === 'cross-validation' ? { ...constraints, trend: 'cross-validated' } : constraints;
}
