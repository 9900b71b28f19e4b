import type { Refit } from '@tallystone/contracts/fits/outcome-refits';
import { fixed } from '../../../ui/numbers';

/** How far another reading of the indeterminates moves the Gini. Nothing where a case is not there. */
export function refitsFinding(cases: readonly Refit[]): string {
  const moved = (wanted: Refit['indeterminates']): string => {
    const found = cases.find(({ indeterminates }) => indeterminates === wanted);
    if (!found) return fixed(null, 3);
    const change = found.gini - cases[0].gini;
    return `${change > 0 ? '+' : ''}${fixed(change, 3)}`;
  };
  return `Sensitivity to the outcome: the Gini moves by ${moved('as good')} with every indeterminate good, by ${moved('as bad')} with every one bad.`;
}
