import { ChangeDetectionStrategy, Component, computed, input, signal } from '@angular/core';
import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import { axisBottom } from 'd3-axis';
import { scaleBand, scaleLinear } from 'd3-scale';
import { AxisDirective } from '../../../ui/axis';
import { type Column } from '../../../ui/column';
import { ElementWidth } from '../../../ui/element-width';
import { FigureFrame, FigurePoint } from '../../../ui/figure-frame';
import { count, plural, share } from '../../../ui/numbers';
import { plain } from './findings';

interface Bar {
  readonly label: string;
  readonly count: number;
  readonly from: number | null;
  readonly to: number | null;
}

const mostBars = 20;
const height = 160;
const margin = { left: 8, right: 8, bottom: 26, top: 8 };

/** How the values of one column lie: a histogram of numbers, months of dates, the most frequent texts. */
@Component({
  selector: 'ts-column-figure',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [AxisDirective, ElementWidth, FigureFrame, FigurePoint],
  template: `
    @if (bars().length === 0) {
      <h3>{{ profile().column }} <span class="ts-caption">{{ note() }}</span></h3>
      <p class="ts-second">{{ finding() }}</p>
    } @else {
      <ts-figure [title]="profile().column" [note]="note()" [finding]="finding()" [table]="table()">
        <div (tsWidth)="width.set($event)">
          @if (isText()) {
            <svg [attr.viewBox]="'0 0 ' + width() + ' ' + textHeight()" [attr.width]="width()" [attr.height]="textHeight()">
              @for (bar of bars(); track bar.label; let index = $index) {
                <svg:rect
                  [tsPoint]="words(bar)"
                  tsPointSeries="values"
                  class="bar"
                  [attr.x]="0"
                  [attr.y]="index * 26 + 18"
                  [attr.width]="texts()(bar.count)"
                  height="6"
                />
                <svg:text x="0" [attr.y]="index * 26 + 13" class="ts-label">{{ short(bar.label) }}</svg:text>
                <svg:text [attr.x]="width()" [attr.y]="index * 26 + 13" text-anchor="end">{{ part(bar.count) }}</svg:text>
              }
            </svg>
          } @else {
            <svg [attr.viewBox]="'0 0 ' + width() + ' ' + height" [attr.width]="width()" [attr.height]="height">
              @for (box of boxes(); track box.bar.label) {
                <svg:rect
                  [tsPoint]="words(box.bar)"
                  tsPointSeries="values"
                  class="bar"
                  [attr.x]="box.x"
                  [attr.y]="box.y"
                  [attr.width]="box.width"
                  [attr.height]="box.height"
                />
              }
              @if (profile().numeric) {
                <svg:g [tsAxis]="axis()" [attr.transform]="'translate(0,' + (height - margin.bottom) + ')'" />
              } @else if (bars().length > 0) {
                <svg:text [attr.x]="margin.left" [attr.y]="height - 6">{{ bars()[0].label }}</svg:text>
                <svg:text [attr.x]="width() - margin.right" [attr.y]="height - 6" text-anchor="end">
                  {{ bars()[bars().length - 1].label }}
                </svg:text>
              }
            </svg>
          }
        </div>
      </ts-figure>
    }
  `,
  styles: `
    h3 .ts-caption {
      font-weight: 400;
      margin-left: 12px;
    }
    .bar {
      fill: var(--ts-primary);
    }
  `,
})
export class ColumnFigure {
  readonly profile = input.required<ColumnProfile>();
  protected readonly width = signal(340);
  protected readonly height = height;
  protected readonly margin = margin;

  protected readonly isText = computed(() => !this.profile().numeric && !this.profile().date);
  protected readonly bars = computed<readonly Bar[]>(() => {
    const { numeric, date, mostFrequent } = this.profile();
    if (numeric) {
      const { edges, counts } = numeric.histogram;
      return counts.map((value, k) => ({
        label: `${plain(edges[k])} to ${plain(edges[k + 1])}`,
        count: value,
        from: edges[k],
        to: edges[k + 1],
      }));
    }
    if (date) return date.months.map(({ month, count: value }) => ({ label: month, count: value, from: null, to: null }));
    return mostFrequent.slice(0, mostBars).map(({ value, count: rows }) => ({ label: value, count: rows, from: null, to: null }));
  });
  private readonly largest = computed(() => Math.max(1, ...this.bars().map((bar) => bar.count)));
  private readonly x = computed(() => {
    const numeric = this.profile().numeric;
    const [low, high] = numeric ? [numeric.smallest, numeric.largest] : [0, 1];
    return scaleLinear()
      .domain(low === high ? [low - 1, high + 1] : [low, high])
      .range([margin.left, this.width() - margin.right]);
  });
  protected readonly axis = computed(() =>
    axisBottom<number>(this.x())
      .ticks(Math.max(2, Math.floor(this.width() / 110)))
      .tickFormat((value) => plain(value)),
  );
  protected readonly texts = computed(() => scaleLinear().domain([0, this.largest()]).range([0, this.width()]));
  protected readonly textHeight = computed(() => Math.max(30, this.bars().length * 26 + 4));
  protected readonly boxes = computed(() => {
    const x = this.x();
    const y = scaleLinear()
      .domain([0, this.largest()])
      .range([height - margin.bottom, margin.top]);
    const band = scaleBand<number>()
      .domain(this.bars().map((_, k) => k))
      .range([margin.left, this.width() - margin.right])
      .paddingInner(0.12);
    return this.bars().map((bar, k) => {
      const left = bar.from === null || bar.from === bar.to ? (band(k) ?? 0) : x(bar.from);
      const width = bar.from === null || bar.to === null || bar.from === bar.to ? band.bandwidth() : x(bar.to) - x(bar.from) - 1;
      return { bar, x: left, y: y(bar.count), width: Math.max(1, width), height: height - margin.bottom - y(bar.count) };
    });
  });
  protected readonly note = computed(() => {
    const { kind, distinct } = this.profile();
    return `${kind}, ${plural(distinct, 'value')}`;
  });
  protected readonly finding = computed(() => {
    const { numeric, date, missing, rows, distinct, hashed } = this.profile();
    const absent = missing > 0 ? `, missing in ${share(missing / rows)}` : ', never missing';
    if (numeric) {
      const median = numeric.quantiles.find((quantile) => quantile.share === 0.5)?.value;
      const special = this.profile().specialSuspects.reduce((sum, suspect) => sum + suspect.count, 0);
      const codes = special > 0 ? `; ${plural(special, 'row')} that may hold special codes are left out here` : '';
      return `Half of the values lie below ${plain(median ?? NaN)}${absent}${codes}.`;
    }
    if (date) return `${plural(date.months.length, 'month')} from ${date.first} to ${date.last}${absent}.`;
    if (hashed) return `${plural(distinct, 'value')}, kept as keyed hashes${absent}.`;
    return `${plural(distinct, 'category', 'categories')}${absent}.`;
  });
  protected readonly table = computed(() => {
    const columns: readonly Column<Bar>[] = [
      { key: 'value', label: 'Value', value: (row) => row.label },
      { key: 'rows', label: 'Rows', kind: 'count', value: (row) => row.count },
      { key: 'share', label: 'Share', kind: 'share', value: (row) => row.count / Math.max(1, this.profile().rows) },
    ];
    return { columns, rows: this.bars() };
  });

  protected part(rows: number): string {
    return `${count(rows)} (${share(rows / Math.max(1, this.profile().rows), 0)})`;
  }

  protected words(bar: Bar): string {
    return `${bar.label}: ${plural(bar.count, 'row')}`;
  }

  protected short(label: string): string {
    return label.length > 32 ? `${label.slice(0, 31)}…` : label;
  }
}
