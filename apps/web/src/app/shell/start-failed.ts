import { ChangeDetectionStrategy, Component } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { Mark } from '../ui/mark';

/** Shown when the server cannot be asked who is here: there is nothing to show yet but this. */
@Component({
  selector: 'ts-start-failed',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, Mark],
  host: { class: 'ts-page' },
  template: `
    <main id="main" class="ts-stack">
      <ts-mark />
      <div>
        <h1 data-page-heading tabindex="-1">The server cannot be reached</h1>
        <p class="ts-second">Nothing was changed. It may be starting, or the connection may be down.</p>
      </div>
      <div class="ts-actions"><button matButton="filled" type="button" (click)="again()">Try again</button></div>
    </main>
  `,
})
export class StartFailed {
  protected again(): void {
    location.reload();
  }
}
