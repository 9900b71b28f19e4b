import { ChangeDetectionStrategy, Component } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { RouterLink } from '@angular/router';
import { EmptyState } from '../ui/empty-state';
import { PageHeader } from '../ui/page-header';

/** For an address that leads nowhere, or nowhere this person may go: both look the same. */
@Component({
  selector: 'ts-not-found',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, RouterLink, EmptyState, PageHeader],
  host: { class: 'ts-page' },
  template: `
    <ts-page-header title="Nothing at this address" />
    <ts-empty
      title="The page does not exist, or it is not open to you"
      text="A link may be old, or your roles may have changed since it was made."
    >
      <a matButton="outlined" routerLink="/models">To the models</a>
    </ts-empty>
  `,
})
export class NotFound {}
