import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { Router, RouterLink, RouterLinkActive, RouterOutlet } from '@angular/router';
import { Runs } from '../core/events/runs';
import { Session } from '../core/session';
import { Shortcuts } from '../core/shortcuts';
import { UnsavedWork } from '../core/unsaved-changes';
import { Ask } from '../ui/ask';
import { Mark } from '../ui/mark';
import { PersonMenu } from './person-menu';
import { places } from './places';
import { ShortcutList } from './shortcut-list';

/** The frame of everything behind sign-in: skip link, top band, the page. */
@Component({
  selector: 'ts-frame',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [RouterOutlet, RouterLink, RouterLinkActive, Mark, PersonMenu],
  template: `
    <a class="skip" href="#main" (click)="skip($event)">Skip to the page</a>
    <header class="band">
      <a class="brand" routerLink="/models" aria-label="Tallystone, to the models"><ts-mark /><span>Tallystone</span></a>
      <nav aria-label="Places">
        <ul>
          @for (place of open(); track place.path) {
            <li>
              <a
                [routerLink]="place.path"
                routerLinkActive="on"
                #link="routerLinkActive"
                [attr.aria-current]="link.isActive ? 'page' : null"
                >{{ place.label }}</a
              >
            </li>
          }
        </ul>
      </nav>
      <ts-person-menu />
    </header>
    <main id="main" tabindex="-1">
      <router-outlet />
    </main>
  `,
  styleUrl: './frame.scss',
})
export class Frame {
  private readonly session = inject(Session);
  private readonly router = inject(Router);

  protected readonly open = computed(() => places.filter((place) => this.session.can(place.ability)));

  constructor() {
    inject(Runs); // listens from here on, whichever page is open
    const ask = inject(Ask);
    inject(UnsavedWork).askWith(async () => {
      const answer = await ask.for({
        title: 'Leave without saving?',
        text: 'What you changed on this page is not saved yet and will be lost.',
        accept: 'Leave',
        cancel: 'Stay',
        grave: true,
      });
      return answer !== null;
    });
    const list = inject(ShortcutList);
    inject(Shortcuts).add(
      { keys: '?', does: 'Show this list', where: 'Everywhere', run: () => void list.open() },
      ...places
        .filter((place) => this.session.can(place.ability))
        .map((place) => ({
          keys: `g ${place.key}`,
          does: `Go to ${place.label}`,
          where: 'Everywhere',
          run: () => void this.router.navigateByUrl(place.path),
        })),
    );
  }

  protected skip(event: Event): void {
    event.preventDefault();
    const main = document.getElementById('main');
    main?.focus();
    main?.scrollIntoView();
  }
}
