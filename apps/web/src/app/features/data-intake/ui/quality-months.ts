import { ChangeDetectionStrategy, Component, computed, input, signal } from '@angular/core';
import { axisLeft } from 'd3-axis';
import { scaleBand, scaleLinear } from 'd3-scale';
import { AxisDirective } from '../../../ui/axis';
import type { Column } from '../../../ui/column';
import { ElementWidth } from '../../../ui/element-width';
import { FigureFrame, FigurePoint } from '../../../ui/figure-frame';
import { monthTicks } from './month-ticks';

/** One bar of a figure by month; null where the month is not told. */
export interface MonthValue {
  readonly month: string;
  readonly value: number | null;
  readonly words: string;
}

const height = 170;
const margin = { left: 46, right: 4, top: 8, bottom: 24 };

/** One value for each month of application, as bars; dashed lines where the reading of the value changes. */
@Component({
  selector: 'ts-quality-months',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [AxisDirective, ElementWidth, FigureFrame, FigurePoint],
  template: `
    <ts-figure [title]="title()" [note]="note()" [finding]="finding()" [table]="{ columns: columns(), rows: values() }">
      <div (tsWidth)="width.set($event)">
        <svg [attr.viewBox]="'0 0 ' + width() + ' ' + height" [attr.width]="width()" [attr.height]="height">
          <svg:g [tsAxis]="axis()" [open]="true" [attr.transform]="'translate(' + margin.left + ',0)'" />
          @for (line of lines(); track line) {
            <svg:line
              class="line"
              [attr.x1]="margin.left"
              [attr.x2]="width() - margin.right"
              [attr.y1]="y()(line)"
              [attr.y2]="y()(line)"
            />
          }
          @for (bar of bars(); track bar.month) {
            <svg:rect
              [tsPoint]="bar.words"
              tsPointSeries="months"
              class="bar"
              [attr.x]="bar.x"
              [attr.y]="bar.y"
              [attr.width]="bar.width"
              [attr.height]="bar.height"
            />
          }
          @for (tick of ticks(); track tick.month) {
            <svg:text [attr.x]="tick.x" [attr.y]="height - 6" [attr.text-anchor]="tick.anchor">{{ tick.month }}</svg:text>
          }
        </svg>
      </div>
    </ts-figure>
  `,
  styles: `
    .bar {
      fill: var(--ts-primary);
    }
    .line {
      stroke: var(--ts-ink-2);
      stroke-dasharray: 4 3;
    }
  `,
})
export class QualityMonths {
  readonly title = input.required<string>();
  readonly note = input('');
  readonly finding = input.required<string>();
  readonly label = input.required<string>();
  readonly kind = input<'count' | 'share' | 'number'>('count');
  readonly values = input.required<readonly MonthValue[]>();
  readonly lines = input<readonly number[]>([]);

  protected readonly width = signal(640);
  protected readonly height = height;
  protected readonly margin = margin;
  protected readonly columns = computed<readonly Column<MonthValue>[]>(() => [
    { key: 'month', label: 'Month', value: (row) => row.month },
    {
      key: 'value',
      label: this.label(),
      kind: this.kind(),
      decimals: this.kind() === 'number' ? 3 : undefined,
      value: (row) => row.value,
    },
  ]);
  private readonly top = computed(() => Math.max(...this.lines(), ...this.values().map(({ value }) => value ?? 0)));
  protected readonly y = computed(() =>
    scaleLinear()
      .domain([0, this.top() > 0 ? this.top() : 1])
      .nice(4)
      .range([height - margin.bottom, margin.top]),
  );
  private readonly x = computed(() =>
    scaleBand<string>()
      .domain(this.values().map(({ month }) => month))
      .range([margin.left, this.width() - margin.right])
      .paddingInner(0.15),
  );
  protected readonly axis = computed(() => axisLeft<number>(this.y()).ticks(4));
  protected readonly bars = computed(() => {
    const [x, y] = [this.x(), this.y()];
    return this.values().map(({ month, value, words }) => ({
      month,
      words,
      x: x(month) ?? 0,
      // A month that is not told can be reached all the same, and says so.
      y: y(value ?? 0) - (value === null || value === 0 ? 1 : 0),
      width: Math.max(1, x.bandwidth()),
      height: Math.max(1, y(0) - y(value ?? 0)),
    }));
  });
  protected readonly ticks = computed(() => monthTicks(this.x()));
}
