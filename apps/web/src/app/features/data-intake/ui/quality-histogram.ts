import { ChangeDetectionStrategy, Component, computed, input, signal } from '@angular/core';
import type { ColumnQualityDetail } from '@tallystone/contracts/samples/quality';
import { axisBottom } from 'd3-axis';
import { scaleLinear } from 'd3-scale';
import { AxisDirective } from '../../../ui/axis';
import type { Column } from '../../../ui/column';
import { ElementWidth } from '../../../ui/element-width';
import { FigureFrame, FigurePoint } from '../../../ui/figure-frame';
import { plural, share } from '../../../ui/numbers';
import { plain } from './findings';

type Histogram = NonNullable<ColumnQualityDetail['histogram']>;

interface Bar {
  readonly label: string;
  readonly goods: number;
  readonly bads: number;
  readonly unknown: number;
}

const sizes = { height: 190, top: 8, bottom: 26, side: 8, names: 46 } as const;

/** How the numbers of one column lie by outcome: goods above the axis, bads below, at one scale. */
@Component({
  selector: 'ts-quality-histogram',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [AxisDirective, ElementWidth, FigureFrame, FigurePoint],
  template: `
    <ts-figure title="Values by outcome" note="rows" [finding]="finding()" [table]="{ columns: columns, rows: bars() }">
      <div (tsWidth)="width.set($event)">
        <svg [attr.viewBox]="'0 0 ' + width() + ' ' + sizes.height" [attr.width]="width()" [attr.height]="sizes.height">
          <svg:text class="ts-label" x="0" [attr.y]="drawn().line - 8">Goods</svg:text>
          <svg:text class="ts-label" x="0" [attr.y]="drawn().line + 16">Bads</svg:text>
          @for (bar of drawn().bars; track bar.x) {
            <svg:g [tsPoint]="bar.words" tsPointSeries="values">
              <svg:rect class="good" [attr.x]="bar.x" [attr.width]="bar.width" [attr.y]="drawn().line - bar.goods" [attr.height]="bar.goods" />
              <svg:rect class="bad" [attr.x]="bar.x" [attr.width]="bar.width" [attr.y]="drawn().line + 1" [attr.height]="bar.bads" />
            </svg:g>
          }
          <svg:g [tsAxis]="axis()" [attr.transform]="'translate(0,' + (sizes.height - sizes.bottom) + ')'" />
        </svg>
      </div>
    </ts-figure>
  `,
  styles: `
    .good {
      fill: var(--ts-good);
    }
    .bad {
      fill: var(--ts-bad);
    }
  `,
})
export class QualityHistogram {
  readonly histogram = input.required<Histogram>();
  protected readonly width = signal(340);
  protected readonly sizes = sizes;
  protected readonly columns: readonly Column<Bar>[] = [
    { key: 'values', label: 'Values', value: (row) => row.label },
    { key: 'goods', label: 'Goods', kind: 'count', value: (row) => row.goods },
    { key: 'bads', label: 'Bads', kind: 'count', value: (row) => row.bads },
    { key: 'unknown', label: 'Not told', kind: 'count', value: (row) => row.unknown },
  ];
  protected readonly bars = computed<readonly Bar[]>(() => {
    const { edges, goods, bads, unknown } = this.histogram();
    return goods.map((_, k) => ({
      label: `${plain(edges[k])} to ${plain(edges[k + 1])}`,
      goods: goods[k],
      bads: bads[k],
      unknown: unknown[k],
    }));
  });
  private readonly x = computed(() => {
    const { edges } = this.histogram();
    return scaleLinear()
      .domain([edges[0], edges[edges.length - 1]])
      .range([sizes.names, this.width() - sizes.side]);
  });
  protected readonly axis = computed(() =>
    axisBottom<number>(this.x())
      .ticks(Math.max(2, Math.floor(this.width() / 110)))
      .tickFormat((value) => plain(value)),
  );
  protected readonly drawn = computed(() => {
    const [x, bars, { edges }] = [this.x(), this.bars(), this.histogram()];
    const [goods, bads] = [Math.max(0, ...bars.map((bar) => bar.goods)), Math.max(0, ...bars.map((bar) => bar.bads))];
    const scale = (sizes.height - sizes.top - sizes.bottom - 8) / Math.max(1, goods + bads);
    return {
      line: sizes.top + goods * scale,
      bars: bars.map((bar, k) => ({
        words: `${bar.label}: ${plural(bar.goods, 'good')}, ${plural(bar.bads, 'bad')}`,
        x: x(edges[k]),
        width: Math.max(1, x(edges[k + 1]) - x(edges[k]) - 1),
        goods: bar.goods * scale,
        bads: bar.bads * scale,
      })),
    };
  });
  /** The bad rate on either side of the middle bar, where rows enough have an outcome. */
  protected readonly finding = computed(() => {
    const bars = this.bars();
    const half = bars.length / 2;
    const rate = (part: readonly Bar[]): number | null => {
      const [goods, bads] = [part.reduce((sum, bar) => sum + bar.goods, 0), part.reduce((sum, bar) => sum + bar.bads, 0)];
      return goods + bads < 30 ? null : bads / (goods + bads);
    };
    const [low, high] = [rate(bars.slice(0, half)), rate(bars.slice(half))];
    const middle = plain(this.histogram().edges[half]);
    return low === null || high === null
      ? 'Of development and hold-out; the outermost bars hold what lies beyond the first and last hundredth.'
      : `Bad rate ${share(low)} below ${middle}, ${share(high)} from there on, of development and hold-out.`;
  });
}
