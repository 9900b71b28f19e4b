import { ChangeDetectionStrategy, Component, computed, input, linkedSignal, output, signal } from '@angular/core';
import { MatButtonToggleModule } from '@angular/material/button-toggle';
import type { CharacteristicMonths } from '@tallystone/contracts/binnings/months';
import { readPeriods, type BenchReading, type Bins, type FineClasses } from '@tallystone/numeric/bench';
import type { Column } from '../../../ui/column';
import { ElementWidth } from '../../../ui/element-width';
import { FigureFrame, FigurePoint } from '../../../ui/figure-frame';
import { partitionName, partitionPath } from '../../../ui/partition-mark';
import { type Measure, type PeriodRow, type Span, drawMonths, monthsFinding, periodRows, usualSpan } from './months-view';

/** WOE or bad rate of every bin by month or quarter of application, a strip for each bin: whether what the bins say holds over time. */
@Component({
  selector: 'ts-months-figure',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonToggleModule, ElementWidth, FigureFrame, FigurePoint],
  template: `
    <div class="views">
      <mat-button-toggle-group
        aria-label="Measure"
        [value]="measure()"
        [hideSingleSelectionIndicator]="true"
        (change)="measured.emit($event.value)"
      >
        <mat-button-toggle value="woe">WOE</mat-button-toggle>
        <mat-button-toggle value="badRate">Bad rate</mat-button-toggle>
      </mat-button-toggle-group>
      <mat-button-toggle-group
        aria-label="Period"
        [value]="span()"
        [hideSingleSelectionIndicator]="true"
        (change)="spanned.emit($event.value)"
      >
        <mat-button-toggle value="month">By month</mat-button-toggle>
        <mat-button-toggle value="quarter">By quarter</mat-button-toggle>
      </mat-button-toggle-group>
    </div>
    <ts-figure [title]="title()" [finding]="finding()" [note]="note()" [table]="table()">
      <div (tsWidth)="wide.set($event)">
        @let drawing = drawn();
        <svg
          [attr.viewBox]="'0 0 ' + drawing.width + ' ' + drawing.height"
          [attr.width]="drawing.width"
          [attr.height]="drawing.height"
        >
          @for (strip of drawing.strips; track $index; let first = $first) {
            <svg:g>
              <svg:title>{{ strip.full }}</svg:title>
              <svg:text class="ts-label" x="0" [attr.y]="strip.level - 1">{{ strip.label }}</svg:text>
              <svg:text x="0" [attr.y]="strip.level + 17">{{ strip.levelWords }}</svg:text>
            </svg:g>
            @if (first) {
              <svg:text class="end" [attr.x]="drawing.left - 6" [attr.y]="strip.top + 10">{{ drawing.ends[0] }}</svg:text>
              <svg:text class="end" [attr.x]="drawing.left - 6" [attr.y]="strip.bottom + 2">{{ drawing.ends[1] }}</svg:text>
            }
            <svg:line
              class="bound"
              [attr.x1]="drawing.left"
              [attr.x2]="drawing.right"
              [attr.y1]="strip.bottom + 6"
              [attr.y2]="strip.bottom + 6"
            />
            <svg:line
              class="level"
              [attr.x1]="drawing.left"
              [attr.x2]="drawing.right"
              [attr.y1]="strip.level"
              [attr.y2]="strip.level"
            />
            @for (mark of strip.marks; track mark.key) {
              @if (mark.interval; as interval) {
                <svg:line
                  class="interval"
                  [attr.x1]="mark.x"
                  [attr.x2]="mark.x"
                  [attr.y1]="interval[0]"
                  [attr.y2]="interval[1]"
                />
              }
            }
            @for (mark of strip.marks; track mark.key) {
              <svg:path
                [class]="'ts-mark ts-mark-' + mark.partition + (mark.small ? ' few' : '')"
                [tsPoint]="mark.label"
                [tsPointSeries]="strip.full + mark.partition"
                [attr.d]="path(mark.partition, drawing.radius)"
                [attr.transform]="'translate(' + mark.x + ',' + mark.y + ')'"
              />
            }
          }
          @for (tick of drawing.ticks; track tick.text) {
            <svg:text class="middle" [attr.x]="tick.x" [attr.y]="drawing.axis + 16">{{ tick.text }}</svg:text>
          }
        </svg>
      </div>
    </ts-figure>
  `,
  styles: `
    :host {
      display: grid;
      grid-template-columns: minmax(0, 1fr);
      gap: 10px;
      min-width: 0;
    }
    .views {
      display: flex;
      flex-wrap: wrap;
      gap: 8px 16px;
    }
    svg {
      display: block;
    }
    .bound {
      stroke: var(--ts-hairline);
    }
    .level {
      stroke: var(--ts-ink-2);
      stroke-dasharray: 3 3;
    }
    .interval {
      stroke: var(--ts-ahead);
    }
    .end {
      text-anchor: end;
    }
    .middle {
      text-anchor: middle;
    }
    path.few {
      fill: var(--ts-paper);
      stroke: var(--ts-ahead);
      stroke-width: 1;
      opacity: 0.75;
    }
  `,
})
export class MonthsFigure {
  readonly fine = input.required<FineClasses>();
  readonly bins = input.required<Bins>();
  readonly reading = input.required<BenchReading>();
  readonly months = input.required<CharacteristicMonths>();
  readonly measure = input<Measure>('woe');
  /** Null: as suits the counts. */
  readonly askedSpan = input<Span | null>(null);
  readonly measured = output<Measure>();
  readonly spanned = output<Span>();

  protected readonly wide = signal(900);
  /** Decided once for the counts that came, not with every move of a cut. */
  private readonly usual = linkedSignal<CharacteristicMonths, Span>({
    source: this.months,
    computation: (months, before) => before?.value ?? usualSpan(this.fine(), this.bins(), months),
  });
  protected readonly span = computed(() => this.askedSpan() ?? this.usual());
  private readonly periods = computed(() => readPeriods(this.fine(), this.bins(), this.months(), this.span()));
  protected readonly title = computed(
    () => `${this.measure() === 'woe' ? 'WOE' : 'Bad rate'} of the bins by ${this.span()} of application`,
  );
  protected readonly finding = computed(() => monthsFinding(this.fine(), this.bins(), this.months(), this.periods()));
  protected readonly note = computed(() => this.months().dateColumn);
  protected readonly drawn = computed(() =>
    drawMonths(this.reading(), this.periods(), { width: this.wide(), measure: this.measure() }),
  );
  protected readonly table = computed(() => ({ columns, rows: periodRows(this.reading(), this.periods()) }));
  protected readonly path = partitionPath;
}

const columns: readonly Column<PeriodRow>[] = [
  { key: 'bin', label: 'Bin', value: (row) => row.bin },
  { key: 'period', label: 'Period', value: (row) => row.period, sortable: true },
  { key: 'partition', label: 'Partition', value: (row) => partitionName(row.partition), sortable: true },
  { key: 'rows', label: 'Rows', kind: 'count', value: (row) => row.cell.rows, sortable: true },
  { key: 'goods', label: 'Goods', kind: 'count', value: (row) => row.cell.goods },
  { key: 'bads', label: 'Bads', kind: 'count', value: (row) => row.cell.bads },
  { key: 'badRate', label: 'Bad rate', kind: 'share', value: (row) => row.cell.badRate, sortable: true },
  { key: 'woe', label: 'WOE', kind: 'woe', value: (row) => row.cell.woe, sortable: true },
  { key: 'lower', label: 'WOE from', unit: '95 %', kind: 'woe', value: (row) => row.cell.woeLower },
  { key: 'upper', label: 'WOE to', unit: '95 %', kind: 'woe', value: (row) => row.cell.woeUpper },
  { key: 'few', label: 'Few goods or bads', value: (row) => row.cell.small, sortable: true },
];
