import { ChangeDetectionStrategy, Component, computed, input, output } from '@angular/core';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatSelectModule } from '@angular/material/select';
import {
  binLabels,
  coarseCount,
  moveMissing,
  moveSpecial,
  moveUnseen,
  type BenchReading,
  type Bins,
  type FineClasses,
  type Place,
} from '@tallystone/numeric/bench';
import { binWords } from '../../../ui/numbers';
import type { MakeEdit } from '../bench/history';

interface PlaceRow {
  readonly label: string;
  readonly place: Place | 'neutral';
  /** The choice that joins no bin. */
  readonly apart: 'own' | 'neutral';
  readonly apartLabel: string;
  readonly move: (place: Place | 'neutral') => void;
}

/** Where special codes, missing values and unseen categories go: a bin of their own, or one of the others. */
@Component({
  selector: 'ts-places',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatFormFieldModule, MatSelectModule],
  template: `
    @for (row of rows(); track row.label) {
      <mat-form-field>
        <mat-label>{{ row.label }}</mat-label>
        <mat-select [value]="row.place" [disabled]="!editable()" (selectionChange)="row.move($event.value)">
          <mat-option [value]="row.apart">{{ row.apartLabel }}</mat-option>
          @for (label of coarse(); track $index) {
            <mat-option [value]="$index">Joins {{ label }}</mat-option>
          }
        </mat-select>
      </mat-form-field>
    }
  `,
  styles: `
    :host {
      display: grid;
      gap: 14px;
    }
  `,
})
export class Places {
  readonly fine = input.required<FineClasses>();
  readonly bins = input.required<Bins>();
  readonly reading = input.required<BenchReading>();
  readonly editable = input(false);
  readonly edited = output<MakeEdit>();

  protected readonly coarse = computed(() =>
    this.reading()
      .bins.slice(0, coarseCount(this.bins()))
      .map(({ label }) => binWords(label)),
  );

  protected readonly rows = computed(() => {
    const fine = this.fine();
    const bins = this.bins();
    const own = { apart: 'own' as const, apartLabel: 'A bin of its own' };
    const name = (now: Bins, place: Place | 'neutral'): string => (typeof place === 'number' ? binLabels(fine, now)[place] : '');
    const rows: PlaceRow[] = fine.special.map((label, code) => ({
      label,
      place: bins.special[code],
      ...own,
      move: (place) => place !== 'neutral' && this.edited.emit((_, now) => moveSpecial(fine, now, code, place, name(now, place))),
    }));
    rows.push({
      label: 'Missing values',
      place: bins.missing,
      ...own,
      move: (place) => place !== 'neutral' && this.edited.emit((_, now) => moveMissing(now, place, name(now, place))),
    });
    if (bins.kind === 'categorical') {
      rows.push({
        label: 'Categories that development has not seen',
        place: bins.unseen,
        apart: 'neutral',
        apartLabel: 'Stay neutral: WOE 0',
        move: (place) =>
          place !== 'own' &&
          this.edited.emit((_, now) => (now.kind === 'categorical' ? moveUnseen(now, place, name(now, place)) : null)),
      });
    }
    return rows;
  });
}
