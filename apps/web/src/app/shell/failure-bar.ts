import { ChangeDetectionStrategy, Component, inject } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { Failures } from '../core/errors';
import { ProblemList } from '../ui/problem-list';

/** A failure that no page showed itself: what happened and the request's id, until it is put away. */
@Component({
  selector: 'ts-failure-bar',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, ProblemList],
  template: `
    @if (failures.shown(); as problem) {
      <div class="bar">
        <ts-problems [error]="problem">
          <button matButton type="button" (click)="failures.dismiss()">Close</button>
        </ts-problems>
      </div>
    }
  `,
  styles: `
    .bar {
      position: fixed;
      inset: auto var(--ts-margin) 20px;
      z-index: 900;
      max-width: 620px;
      padding: 14px 18px;
      background: var(--ts-surface);
      border: 1px solid var(--ts-ahead);
      border-radius: var(--ts-corner);
      box-shadow: 0 6px 24px light-dark(rgb(30 35 40 / 18%), rgb(0 0 0 / 60%));
    }
  `,
})
export class FailureBar {
  protected readonly failures = inject(Failures);
}
