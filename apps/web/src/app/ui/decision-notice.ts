import { ChangeDetectionStrategy, Component } from '@angular/core';

/**
 * The one ochre thing on a page: what to decide next. Words and, after them, the buttons that decide.
 *
 * @example <ts-decision><b>Loan term</b> is kept in 58 % of resamples. Take it or leave it, and say why.<button tsDecide matButton>…</button></ts-decision>
 */
@Component({
  selector: 'ts-decision',
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { role: 'note', 'aria-label': 'To decide' },
  template: `
    <div class="words"><ng-content /></div>
    <div class="actions"><ng-content select="[tsDecide]" /></div>
  `,
  styles: `
    :host {
      display: flex;
      flex-wrap: wrap;
      align-items: center;
      gap: 10px 24px;
      border-left: 3px solid var(--ts-ochre-mark);
      padding: 6px 0 6px 14px;
    }
    .words {
      flex: 1 1 280px;
      max-width: var(--ts-measure);
    }
    .actions {
      display: flex;
      flex-wrap: wrap;
      gap: 10px;
    }
    .actions:empty {
      display: none;
    }
  `,
})
export class DecisionNotice {}
