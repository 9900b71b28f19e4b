import { ChangeDetectionStrategy, Component, computed, input, output } from '@angular/core';
import { moment } from '../../../ui/numbers';

/** When the draft was saved and by whom, and what gave way when two people had saved. */
@Component({
  selector: 'ts-save-state',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <p class="ts-caption" role="status">{{ words() }}</p>
    @if (aside(); as whose) {
      <p class="ts-caption">
        {{ whose === 'mine' ? 'Your draft gave way.' : 'Their draft gave way.' }}
        <button type="button" (click)="broughtBack.emit()">
          {{ whose === 'mine' ? 'Bring mine back' : 'Bring theirs back' }}
        </button>
      </p>
    }
  `,
  styles: `
    button {
      min-height: 24px;
      padding: 2px 0;
      border: 0;
      background: none;
      font: inherit;
      color: var(--ts-primary);
      text-decoration: underline;
      text-decoration-thickness: 1px;
      text-underline-offset: 3px;
      cursor: pointer;
    }
  `,
})
export class SaveStateNote {
  readonly state = input.required<'saved' | 'unsaved' | 'saving' | 'stale' | 'failed'>();
  readonly savedAt = input<string | null>(null);
  readonly savedBy = input<string | null>(null);
  /** Whose draft gave way and can be had back. */
  readonly aside = input<'theirs' | 'mine' | null>(null);
  readonly broughtBack = output();

  protected readonly words = computed(() => {
    const state = this.state();
    if (state === 'failed') return 'Not saved. It is tried again with the next change.';
    if (state === 'stale') return 'Not saved: someone else saved first.';
    if (state !== 'saved') return 'Saving';
    const at = this.savedAt();
    return at ? `Saved ${moment(at)}${this.savedBy() ? ` by ${this.savedBy()}` : ''}` : '';
  });
}
