import { ChangeDetectionStrategy, Component, computed, input, output } from '@angular/core';
import { MatButtonToggleModule } from '@angular/material/button-toggle';
import { count, share } from '../../../ui/numbers';

/** One value of a column with its count (null = the column does not list it) and what it is taken to mean; null = nothing yet. */
export interface MappedValue {
  readonly value: string;
  readonly count: number | null;
  readonly meaning: string | null;
}

export interface Meaning {
  readonly key: string;
  readonly label: string;
}

/** Values with their counts, each given one meaning: good, bad, ...; development, hold-out, .... Pressing a meaning again takes it back. */
@Component({
  selector: 'ts-value-mapping',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonToggleModule],
  template: `
    <div class="grid" role="group" [attr.aria-label]="label()">
      @for (entry of values(); track entry.value) {
        <div class="row" [class.open]="entry.meaning === null">
          <span class="value">{{ entry.value === '' ? 'empty' : entry.value }}</span>
          @if (entry.count === null) {
            <span class="absent ts-second">{{ absent() }}</span>
          } @else {
            <span class="ts-number">{{ count(entry.count) }}</span>
            <span class="ts-number ts-second">{{ share(entry.count / rows()) }}</span>
          }
          <mat-button-toggle-group
            [attr.aria-label]="(entry.value === '' ? 'empty' : entry.value) + ' means'"
            [value]="entry.meaning"
            [disabled]="!editable()"
            [hideSingleSelectionIndicator]="true"
          >
            @for (meaning of meanings(); track meaning.key) {
              <mat-button-toggle
                [value]="meaning.key"
                (change)="choose(entry, meaning.key)"
                (click)="takeBack(entry, meaning.key)"
                >{{ meaning.label }}</mat-button-toggle
              >
            }
          </mat-button-toggle-group>
        </div>
      }
    </div>
    @if (complete() && hasAbsent()) {
      <p class="ts-caption">To take out a value that is not in this file, press its meaning again.</p>
    }
  `,
  styles: `
    .absent {
      grid-column: span 2;
    }
    .row {
      display: grid;
      grid-template-columns: minmax(80px, 1fr) 80px 72px auto;
      gap: 4px 16px;
      align-items: center;
      padding: 6px 0;
      border-bottom: 1px solid var(--ts-hairline);
    }
    .value {
      overflow-wrap: anywhere;
    }
    .open .value {
      font-weight: 600;
    }
    .grid {
      max-width: 760px;
    }
    @media (max-width: 640px) {
      .row {
        grid-template-columns: minmax(0, 1fr) auto auto;
      }
      mat-button-toggle-group {
        grid-column: 1 / -1;
        flex-wrap: wrap;
      }
    }
  `,
})
export class ValueMapping {
  readonly label = input.required<string>();
  readonly values = input.required<readonly MappedValue[]>();
  readonly meanings = input.required<readonly Meaning[]>();
  readonly rows = input(1);
  readonly editable = input(false);
  /** Whether the column lists all of its values. */
  readonly complete = input(true);
  /** Null takes the meaning back. */
  readonly mapped = output<{ value: string; meaning: string | null }>();
  protected readonly count = count;
  protected readonly share = share;
  protected readonly absent = computed(() => (this.complete() ? 'not in this file' : 'not among those listed'));
  protected readonly hasAbsent = computed(() => this.editable() && this.values().some((entry) => entry.count === null));

  /** Chosen by the press that is under way, which must not take it back too. */
  private fresh: string | null = null;

  /** By pointer, or by an arrow key, which presses nothing. */
  protected choose({ value, meaning }: MappedValue, chosen: string): void {
    if (!this.editable() || meaning === chosen) return;
    this.fresh = JSON.stringify([value, chosen]);
    setTimeout(() => (this.fresh = null));
    this.mapped.emit({ value, meaning: chosen });
  }

  /** A group of toggles never lets its last one go by itself: pressing again is seen here. */
  protected takeBack({ value, meaning }: MappedValue, pressed: string): void {
    if (!this.editable() || meaning !== pressed || this.fresh === JSON.stringify([value, pressed])) return;
    this.mapped.emit({ value, meaning: null });
  }
}
