import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { MAT_DIALOG_DATA, MatDialogModule } from '@angular/material/dialog';
import type { Draft, DraftContent } from '@tallystone/contracts/samples/definition';
import { moment } from '../../../ui/numbers';
import { draftDifferences } from './draft-difference';

export interface StaleDraftQuestion {
  /** As someone else saved it. */
  readonly theirs: Draft;
  /** What both began from. */
  readonly before: DraftContent;
  /** Functions that follow what is typed until the dialog is there. */
  readonly mine: () => DraftContent | null;
  readonly canKeepBoth: () => boolean;
}

export type StaleDraftAnswer = 'theirs' | 'mine' | 'both';

/** Somebody saved the draft first: what differs between theirs and mine, and a person says which stays, or both. */
@Component({
  selector: 'ts-stale-draft-dialog',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, MatDialogModule],
  template: `
    <h2 mat-dialog-title>{{ by }} saved this draft first</h2>
    <mat-dialog-content>
      <p>
        Saved {{ when }}, while your changes were not saved yet.
        @if (asked.canKeepBoth()) {
          You changed different things, so both can be kept. What gives way otherwise can be brought back while you are here.
        } @else {
          You changed some of the same things, so one of the two stays. What gives way can be brought back while you are here.
        }
      </p>
      @for (group of groups(); track group.title) {
        <section [attr.aria-label]="group.title">
          <h3>{{ group.title }}</h3>
          <dl>
            @for (difference of group.differences; track difference.what) {
              <div>
                <dt>{{ difference.what }}</dt>
                <dd><span class="ts-caption">Theirs</span> {{ difference.theirs }}</dd>
                <dd><span class="ts-caption">Mine</span> {{ difference.mine }}</dd>
              </div>
            }
          </dl>
        </section>
      }
    </mat-dialog-content>
    <mat-dialog-actions align="end">
      <button matButton type="button" mat-dialog-close>Decide later</button>
      <button matButton="outlined" type="button" [mat-dialog-close]="'theirs'">Take theirs</button>
      <button matButton="outlined" type="button" [mat-dialog-close]="'mine'">Save mine</button>
      @if (asked.canKeepBoth()) {
        <button matButton="filled" type="button" [mat-dialog-close]="'both'">Keep both</button>
      }
    </mat-dialog-actions>
  `,
  styles: `
    section {
      margin-top: 16px;
    }
    dl {
      display: grid;
      gap: 10px;
      margin: 6px 0 0;
    }
    dl > div {
      display: grid;
      grid-template-columns: repeat(2, minmax(0, 1fr));
      gap: 2px 24px;
      padding-top: 8px;
      border-top: 1px solid var(--ts-hairline);
    }
    dt {
      grid-column: 1 / -1;
      font-weight: 600;
      overflow-wrap: anywhere;
    }
    dd {
      margin: 0;
      overflow-wrap: anywhere;
    }
    dd .ts-caption {
      display: block;
    }
    mat-dialog-actions {
      flex-wrap: wrap;
      gap: 8px;
    }
  `,
})
export class StaleDraftDialog {
  protected readonly asked = inject<StaleDraftQuestion>(MAT_DIALOG_DATA);
  protected readonly by = this.asked.theirs.savedBy;
  protected readonly when = moment(this.asked.theirs.savedAt);
  protected readonly groups = computed(() => {
    const mine = this.asked.mine();
    const found = mine ? draftDifferences(this.asked.before, this.asked.theirs.content, mine) : [];
    return [
      { title: 'Changed by both', by: 'both' },
      { title: `Changed by ${this.by}`, by: 'theirs' },
      { title: 'Changed by you', by: 'mine' },
    ]
      .map(({ title, by }) => ({ title, differences: found.filter((difference) => difference.by === by) }))
      .filter(({ differences }) => differences.length > 0);
  });
}
