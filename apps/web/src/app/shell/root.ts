import { ChangeDetectionStrategy, Component, inject } from '@angular/core';
import { RouterOutlet } from '@angular/router';
import { Theme } from '../core/theme';
import { FocusOnNavigation } from '../core/navigation';
import { Shortcuts } from '../core/shortcuts';
import { FailureBar } from './failure-bar';

/** The whole application: whatever the address says, and a bar for failures nobody else showed. */
@Component({
  selector: 'ts-root',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [RouterOutlet, FailureBar],
  template: `
    <router-outlet />
    <ts-failure-bar />
  `,
})
export class Root {
  constructor() {
    inject(Theme);
    inject(FocusOnNavigation).start();
    inject(Shortcuts).start();
  }
}
