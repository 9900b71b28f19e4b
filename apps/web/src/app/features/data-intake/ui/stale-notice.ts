import { ChangeDetectionStrategy, Component, computed, input, output } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { DecisionNotice } from '../../../ui/decision-notice';
import { moment } from '../../../ui/numbers';

/** Someone else saved the draft first: who that was and when, in sight wherever the page is scrolled to until it is settled. */
@Component({
  selector: 'ts-stale-notice',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, DecisionNotice],
  template: `
    <ts-decision>
      {{ first() }} Your changes are kept here and not saved until you say which draft stays.
      <button tsDecide matButton="outlined" type="button" (click)="settled.emit()">Compare and decide</button>
    </ts-decision>
  `,
  // First in a page and not in a grid: there it would stick within its own row alone.
  styles: `
    :host {
      display: block;
      position: sticky;
      top: 0;
      z-index: 5;
      margin-bottom: 20px;
      padding: 8px 0;
      background: var(--ts-paper);
      border-bottom: 1px solid var(--ts-hairline);
    }
  `,
})
export class StaleNotice {
  /** What someone else saved first; null until it is read. */
  readonly theirs = input.required<{ readonly savedAt: string; readonly savedBy: string } | null>();
  readonly settled = output();

  protected readonly first = computed(() => {
    const theirs = this.theirs();
    return theirs
      ? `${theirs.savedBy} saved this draft first, ${moment(theirs.savedAt)}.`
      : 'Someone else saved this draft first.';
  });
}
