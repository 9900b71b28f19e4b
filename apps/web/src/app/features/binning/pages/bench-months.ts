import { ChangeDetectionStrategy, Component, computed, effect, input, output } from '@angular/core';
import { toObservable, toSignal } from '@angular/core/rxjs-interop';
import { MatButtonModule } from '@angular/material/button';
import {
  fewestToRead,
  monthlyDrift,
  type BenchReading,
  type Bins,
  type FineClasses,
  type MonthlyDrift,
} from '@tallystone/numeric/bench';
import { debounceTime } from 'rxjs';
import { ProblemList } from '../../../ui/problem-list';
import { count, plural } from '../../../ui/numbers';
import { monthsOf } from '../data/binnings';
import { MonthsFigure } from '../ui/months-figure';
import { type Measure, type Span, fits } from '../ui/months-view';

/** How long bins have to rest before they are drawn over time. */
const SETTLED_MS = 150;

/** The part of the bench that shows its bins over time. Counts come by themselves, so that the bench does not wait for them. */
@Component({
  selector: 'ts-bench-months',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, MonthsFigure, ProblemList],
  template: `
    <h3>Over time</h3>
    <ts-problems [error]="months.error()">
      <button matButton="outlined" type="button" (click)="months.reload()">Try again</button>
    </ts-problems>
    @if (shown(); as shown) {
      @if (shown.dateColumn) {
        <ts-months-figure
          [fine]="drawn().fine"
          [bins]="drawn().bins"
          [reading]="drawn().reading"
          [months]="shown"
          [measure]="measure()"
          [askedSpan]="askedSpan()"
          (measured)="measured.emit($event)"
          (spanned)="spanned.emit($event)"
        />
        <p class="ts-caption">
          Bar: development, circle: hold-out{{ fine().outOfTime ? ', diamond: out-of-time' : '' }}, each with its 95 % interval
          from its own counts. Broken line: the bin over all of development; every strip has the same scale about its own line.
          Hollow: fewer than {{ fewest }} goods or bads, which say little (common practice). How far WOE moves is a standard
          deviation between months beyond chance, the level of each month taken out (method of moments, D. A. Williams, 1982; from
          memory).{{ undatedWords() }}
        </p>
      } @else {
        <p class="ts-second">No column of this sample is the application date, so that its rows cannot be told apart by month.</p>
      }
    } @else if (!months.error()) {
      <div class="loading" aria-busy="true"></div>
    }
  `,
  styles: `
    :host {
      display: grid;
      grid-template-columns: minmax(0, 1fr);
      gap: 12px;
      margin-top: 10px;
    }
    p.ts-caption {
      max-width: none;
    }
    .loading {
      min-height: 320px;
    }
  `,
})
export class BenchMonths {
  readonly binningId = input.required<string>();
  readonly characteristicId = input.required<string>();
  readonly fine = input.required<FineClasses>();
  readonly bins = input.required<Bins>();
  readonly reading = input.required<BenchReading>();
  readonly measure = input<Measure>('woe');
  /** Null: as suits the counts. */
  readonly askedSpan = input<Span | null>(null);
  readonly measured = output<Measure>();
  readonly spanned = output<Span>();
  /** How far WOE moves between months, with the bins as they rest; null where that cannot be told. */
  readonly drifts = output<MonthlyDrift | null>();

  protected readonly fewest = fewestToRead;
  protected readonly months = monthsOf(
    () => this.binningId(),
    () => this.characteristicId(),
  );
  private readonly now = computed(() => ({ fine: this.fine(), bins: this.bins(), reading: this.reading() }));
  private readonly settled = toSignal(toObservable(this.now).pipe(debounceTime(SETTLED_MS)), { initialValue: null });
  /** The bins once they rest: hundreds of marks are not drawn anew with every step of a drag. */
  protected readonly drawn = computed(() => this.settled() ?? this.now());
  protected readonly shown = computed(() => {
    const months = this.months.hasValue() ? this.months.value() : null;
    return months && fits(this.drawn().fine, months) ? months : null;
  });
  protected readonly undatedWords = computed(() => {
    const undated = this.shown()?.undated ?? 0;
    return undated === 0 ? '' : ` ${plural(undated, 'row')} of ${count(this.rows())} ${undated === 1 ? 'has' : 'have'} no date.`;
  });
  private readonly rows = computed(() =>
    [this.fine().development, this.fine().holdOut].reduce((sum, { rows }) => sum + rows.reduce((a, b) => a + b, 0), 0),
  );

  constructor() {
    effect(() => {
      const shown = this.shown();
      this.drifts.emit(shown?.dateColumn ? monthlyDrift(this.drawn().fine, this.drawn().bins, shown) : null);
    });
    // A fine class was split, or out-of-time was opened: the counts are others now.
    let before = '';
    effect(() => {
      const now = `${this.characteristicId()}|${this.fine().edges.length}|${this.fine().outOfTime !== null}`;
      if (before.startsWith(`${this.characteristicId()}|`) && now !== before) this.months.reload();
      before = now;
    });
  }
}
