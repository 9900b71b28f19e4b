import type { ModelState } from '@tallystone/contracts/models/schema';
import { count, plural } from '../../../ui/numbers';
import { modelStates } from '../../../ui/version-state';

/** "Four models" reads worse than "4 models" in a ledger: figures stay figures. Names the states that occur, in the order of a life. */
export function inventoryFinding(models: readonly { readonly state: ModelState }[], filtered: boolean): string {
  if (models.length === 0) return filtered ? 'No model fits this search.' : 'No model has been entered yet.';
  const counts = new Map<ModelState, number>();
  for (const { state } of models) counts.set(state, (counts.get(state) ?? 0) + 1);
  const parts = modelStates
    .filter((state) => counts.has(state))
    .map((state) => `${count(counts.get(state))} ${state.toLowerCase()}`);
  const found = filtered ? ' found' : '';
  if (parts.length === 1) {
    const state = parts[0].slice(parts[0].indexOf(' ') + 1);
    return `${plural(models.length, 'model')}${found}, ${models.length === 1 ? '' : 'all '}${state}.`;
  }
  return `${plural(models.length, 'model')}${found}: ${parts.slice(0, -1).join(', ')} and ${parts.at(-1)}.`;
}
