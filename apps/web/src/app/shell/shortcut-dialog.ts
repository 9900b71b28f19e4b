import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { MatDialogModule } from '@angular/material/dialog';
import { Shortcuts } from '../core/shortcuts';

/** What the keyboard does on this page. */
@Component({
  selector: 'ts-shortcut-dialog',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, MatDialogModule],
  template: `
    <h2 mat-dialog-title>Shortcuts</h2>
    <mat-dialog-content tabindex="0">
      @if (!shortcuts.enabled()) {
        <p class="ts-second">Single-key shortcuts are switched off in your account.</p>
      }
      @for (place of groups(); track place.where) {
        <h3>{{ place.where }}</h3>
        <dl>
          @for (shortcut of place.list; track shortcut.keys) {
            <dt>
              @for (key of keys(shortcut.keys); track $index) {
                <kbd>{{ key }}</kbd>
              }
            </dt>
            <dd>{{ shortcut.does }}</dd>
          }
        </dl>
      }
    </mat-dialog-content>
    <mat-dialog-actions align="end"><button matButton type="button" mat-dialog-close>Close</button></mat-dialog-actions>
  `,
  styles: `
    h3 {
      font-size: 15px;
      margin: 12px 0 4px;
    }
    dl {
      display: grid;
      grid-template-columns: 116px 1fr;
      gap: 6px 16px;
    }
    kbd {
      margin-right: 4px;
    }
  `,
})
export class ShortcutDialog {
  protected readonly shortcuts = inject(Shortcuts);
  protected readonly groups = computed(() =>
    this.shortcuts.places().map((where) => ({ where, list: this.shortcuts.list().filter((entry) => entry.where === where) })),
  );

  protected keys(keys: string): string[] {
    const mac = /Mac|iPhone|iPad/.test(navigator.userAgent);
    return keys.split(/[ +]/).map((key) => (key === 'Mod' ? (mac ? '⌘' : 'Ctrl') : key));
  }
}
