import { ChangeDetectionStrategy, Component, input } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { RouterLink } from '@angular/router';
import type { Sample } from '@tallystone/contracts/samples/schema';
import { EmptyState } from '../../../ui/empty-state';
import { Tombstone } from '../../../ui/tombstone';

/**
 * Stands where columns are needed of a file that has not been read, with the way to its reading. Where its rows were erased before, it never will be.
 *
 * @example <ts-not-read-yet [sample]="sample" />
 */
@Component({
  selector: 'ts-not-read-yet',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [RouterLink, MatButtonModule, EmptyState, Tombstone],
  template: `
    @if (sample().erased; as erased) {
      <ts-tombstone [erased]="erased">The file had not been read before: nothing is known of its columns.</ts-tombstone>
    } @else {
      <ts-empty title="The file has not been read yet" text="Its columns are known once it has been read.">
        <a matButton="outlined" [routerLink]="['/models', sample().modelId, 'sample', sample().id, 'reading']"
          >To the reading choices</a
        >
      </ts-empty>
    }
  `,
})
export class NotReadYet {
  readonly sample = input.required<Pick<Sample, 'id' | 'modelId' | 'erased'>>();
}
