import { ChangeDetectionStrategy, Component, inject } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { MAT_DIALOG_DATA, MatDialogModule } from '@angular/material/dialog';
import { binWords, moment, woe } from '../../../ui/numbers';
import { type SaidEdit, editWords } from './edit-words';

/** One side: its bins with what they say, and the edits that made them. */
export interface StaleSide {
  readonly informationValue: number;
  readonly bins: readonly string[];
  /** With who made each, where that is somebody else. */
  readonly edits: readonly (SaidEdit & { readonly by?: string })[];
}

export interface StaleQuestion {
  readonly column: string;
  readonly by: string;
  readonly at: string;
  readonly theirs: StaleSide;
  readonly mine: StaleSide;
}

export type StaleAnswer = 'theirs' | 'mine';

/** Somebody saved first: both states side by side, and a person says which stays. Neither is lost: the history keeps their edits, undo keeps mine. */
@Component({
  selector: 'ts-stale-dialog',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, MatDialogModule],
  template: `
    <h2 mat-dialog-title>{{ asked.by }} saved {{ asked.column }} first</h2>
    <mat-dialog-content>
      <p>
        Saved {{ when }}, while your bins were not saved yet. Take theirs, and Undo brings yours back while you are here; or keep
        yours with their reasons, and theirs stay in the history.
      </p>
      <div class="sides">
        @for (side of sides; track side.title) {
          <section [attr.aria-label]="side.title">
            <h3>{{ side.title }}</h3>
            <p class="ts-caption">IV {{ woe(side.of.informationValue) }}</p>
            <ol>
              @for (bin of side.of.bins; track $index) {
                <li>{{ binWords(bin) }}</li>
              }
            </ol>
            @if (side.of.edits.length > 0) {
              <p class="ts-caption">Edits</p>
              <ul>
                @for (edit of side.of.edits; track $index) {
                  <li>{{ editWords(edit) }}{{ edit.by ? ' (' + edit.by + ')' : '' }}</li>
                }
              </ul>
            }
          </section>
        }
      </div>
    </mat-dialog-content>
    <mat-dialog-actions align="end">
      <button matButton type="button" mat-dialog-close>Decide later</button>
      <button matButton="outlined" type="button" [mat-dialog-close]="'theirs'">Take theirs</button>
      <button matButton="outlined" type="button" [mat-dialog-close]="'mine'">Keep mine</button>
    </mat-dialog-actions>
  `,
  styles: `
    .sides {
      display: grid;
      grid-template-columns: repeat(auto-fit, minmax(min(100%, 220px), 1fr));
      gap: 24px;
      margin-top: 16px;
    }
    ol,
    ul {
      padding-left: 20px;
    }
    .ts-caption {
      margin-top: 6px;
    }
  `,
})
export class StaleDialog {
  protected readonly asked = inject<StaleQuestion>(MAT_DIALOG_DATA);
  protected readonly when = moment(this.asked.at);
  protected readonly woe = woe;
  protected readonly binWords = binWords;
  protected readonly editWords = editWords;
  protected readonly sides = [
    { title: `Theirs: ${this.asked.by}`, of: this.asked.theirs },
    { title: 'Mine', of: this.asked.mine },
  ];
}
