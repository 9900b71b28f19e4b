import { Injector, effect, inject, untracked } from '@angular/core';
import { firstValueFrom } from 'rxjs';
import type { DraftStore } from '../data/draft-store';
import type { StaleDraftAnswer, StaleDraftQuestion } from '../ui/stale-draft-dialog';

/**
 * Call in the constructor of a page that edits the draft: when someone else saved first, both are shown by themselves and a person says which
 * stays. Gives what asks again after "Decide later". The dialog's code is loaded when it is first needed.
 */
export function asksWhenStale(draft: DraftStore): () => Promise<void> {
  const injector = inject(Injector);
  let asking = false;
  const answered = async (): Promise<StaleDraftAnswer | undefined> => {
    // Theirs could not be read when the save was refused.
    if (!draft.theirs()) await draft.compare();
    const [theirs, before] = [draft.theirs(), draft.before()];
    if (!theirs || !before) return undefined;
    const [{ MatDialog }, { StaleDraftDialog }] = await Promise.all([
      import('@angular/material/dialog'),
      import('../ui/stale-draft-dialog'),
    ]);
    const data: StaleDraftQuestion = { theirs, before, mine: draft.content, canKeepBoth: () => draft.both() !== null };
    const reference = injector
      .get(MatDialog)
      .open<InstanceType<typeof StaleDraftDialog>, StaleDraftQuestion, StaleDraftAnswer>(StaleDraftDialog, {
        data,
        width: '720px',
      });
    return firstValueFrom(reference.afterClosed());
  };
  const ask = async (): Promise<void> => {
    if (asking) return;
    asking = true;
    // Ends before the answer is carried out: what is saved once more meanwhile is asked about again.
    const answer = await answered().finally(() => (asking = false));
    if (answer === 'theirs') await draft.takeTheirs();
    else if (answer === 'mine') await draft.keepMine();
    else if (answer === 'both') await draft.keepBoth();
  };
  effect(() => {
    if (draft.theirs()) untracked(() => void ask());
  });
  return ask;
}
