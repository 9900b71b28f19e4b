import { ChangeDetectionStrategy, Component, inject } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { MatIconModule } from '@angular/material/icon';
import { MatMenuModule } from '@angular/material/menu';
import { RouterLink } from '@angular/router';
import { Session } from '../core/session';
import { Theme, type ThemeChoice } from '../core/theme';
import { ShortcutList } from './shortcut-list';

const themes: readonly { readonly choice: ThemeChoice; readonly label: string; readonly icon: string }[] = [
  { choice: 'light', label: 'Light', icon: 'theme-light' },
  { choice: 'dark', label: 'Dark', icon: 'theme-dark' },
  { choice: 'system', label: 'As the system', icon: 'theme-system' },
];

/** The person at the right of the band: account, light or dark, shortcuts, sign out. */
@Component({
  selector: 'ts-person-menu',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, MatIconModule, MatMenuModule, RouterLink],
  template: `
    @if (session.person(); as person) {
      <button matButton type="button" class="person" [matMenuTriggerFor]="menu">
        <span class="name">{{ person.name }}</span>
        <mat-icon iconPositionEnd svgIcon="chevron-down" />
      </button>
      <mat-menu #menu="matMenu" xPosition="before">
        <a mat-menu-item routerLink="/account"><mat-icon svgIcon="account" /><span>Account</span></a>
        <button mat-menu-item type="button" [matMenuTriggerFor]="look">
          <mat-icon svgIcon="theme-system" /><span>Light or dark</span>
        </button>
        <button mat-menu-item type="button" (click)="list.open()"><mat-icon svgIcon="keyboard" /><span>Shortcuts</span></button>
        <button mat-menu-item type="button" (click)="session.signOut()">
          <mat-icon svgIcon="sign-out" /><span>Sign out</span>
        </button>
      </mat-menu>
      <mat-menu #look="matMenu">
        @for (entry of themes; track entry.choice) {
          <button
            mat-menu-item
            type="button"
            role="menuitemradio"
            [attr.aria-checked]="theme.choice() === entry.choice"
            (click)="theme.choose(entry.choice)"
          >
            <mat-icon [svgIcon]="theme.choice() === entry.choice ? 'check' : entry.icon" /><span>{{ entry.label }}</span>
          </button>
        }
      </mat-menu>
    }
  `,
  styles: `
    .person {
      --mat-button-text-label-text-color: var(--ts-ink-2);
      --mat-button-text-label-text-weight: 400;
      margin-right: -10px;
      max-width: min(46vw, 320px);
    }
    .name {
      display: block;
      overflow: hidden;
      text-overflow: ellipsis;
      white-space: nowrap;
      max-width: calc(min(46vw, 320px) - 56px);
    }
  `,
})
export class PersonMenu {
  protected readonly session = inject(Session);
  protected readonly theme = inject(Theme);
  protected readonly list = inject(ShortcutList);
  protected readonly themes = themes;
}
