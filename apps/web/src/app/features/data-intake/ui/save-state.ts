import { ChangeDetectionStrategy, Component, computed, input, output } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { DecisionNotice } from '../../../ui/decision-notice';
import { moment } from '../../../ui/numbers';

/** When the draft was saved and by whom; and when someone else saved first, the choice between theirs and one's own. */
@Component({
  selector: 'ts-save-state',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, DecisionNotice],
  template: `
    @if (state() === 'stale') {
      <ts-decision>
        Someone else saved this draft meanwhile. Yours has not been saved: take theirs, or save yours over it.
        <button tsDecide matButton="outlined" type="button" (click)="theirs.emit()">Take theirs</button>
        <button tsDecide matButton="outlined" type="button" (click)="mine.emit()">Save mine</button>
      </ts-decision>
    } @else {
      <p class="ts-caption" role="status">{{ words() }}</p>
    }
  `,
})
export class SaveStateNote {
  readonly state = input.required<'saved' | 'unsaved' | 'saving' | 'stale' | 'failed'>();
  readonly savedAt = input<string | null>(null);
  readonly savedBy = input<string | null>(null);
  readonly theirs = output();
  readonly mine = output();

  protected readonly words = computed(() => {
    const state = this.state();
    if (state === 'failed') return 'Not saved. It is tried again with the next change.';
    if (state !== 'saved') return 'Saving';
    const at = this.savedAt();
    return at ? `Saved ${moment(at)}${this.savedBy() ? ` by ${this.savedBy()}` : ''}` : '';
  });
}
