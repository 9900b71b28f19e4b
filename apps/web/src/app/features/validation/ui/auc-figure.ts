import { ChangeDetectionStrategy, Component, computed, input, signal } from '@angular/core';
import type { PartitionAuc } from '@tallystone/contracts/validation/schema';
import { scaleLinear } from 'd3-scale';
import { type Column } from '../../../ui/column';
import { ElementWidth } from '../../../ui/element-width';
import { FigureFrame, FigurePoint, type FigureTable } from '../../../ui/figure-frame';
import { count, fixed, metric, share } from '../../../ui/numbers';
import { partitionName, partitionPath, partitions } from '../../../ui/partition-mark';
import { aucWords, hosmerLemeshowWords, performanceFinding } from './validation-view';

const rowHeight = 40;

/** AUC by partition with DeLong's 95 % interval, and under it the other measures; out-of-time stays covered until opened. */
@Component({
  selector: 'ts-auc-figure',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [ElementWidth, FigureFrame, FigurePoint],
  template: `
    <div (tsWidth)="width.set($event)">
      <ts-figure title="AUC by partition" [finding]="finding()" note="DeLong, 95 %" [table]="table()">
        <svg [attr.viewBox]="'0 0 ' + layout().width + ' ' + layout().height" [attr.width]="layout().width" [attr.height]="layout().height">
          @for (row of rows(); track row.partition) {
            @if (row.words) {
              <svg:g [tsPoint]="row.name + ': AUC ' + row.words" tsPointSeries="partitions">
                <svg:rect class="reach" x="0" [attr.y]="row.y - 16" [attr.width]="layout().width" height="32" />
                <svg:text class="ts-label" x="0" [attr.y]="row.y + 4">{{ row.name }}</svg:text>
                @if (row.interval) {
                  <svg:path class="interval" [attr.d]="row.interval" />
                }
                <svg:path class="ts-mark" [class]="'ts-mark ts-mark-' + row.partition" [attr.d]="row.mark" [attr.transform]="'translate(' + row.x + ',' + row.y + ')'" />
                <svg:text class="end" [attr.x]="layout().width" [attr.y]="row.y + 4">{{ row.words }}</svg:text>
              </svg:g>
            } @else {
              <svg:text class="ts-label" x="0" [attr.y]="row.y + 4">{{ row.name }}</svg:text>
              <svg:rect class="cover" [attr.x]="layout().left" [attr.y]="row.y - 9" [attr.width]="layout().right - layout().left" height="18" />
              <svg:text class="end" [attr.x]="layout().width" [attr.y]="row.y + 4">covered</svg:text>
            }
          }
          <svg:line class="axis" [attr.x1]="layout().left" [attr.x2]="layout().right" [attr.y1]="layout().axis" [attr.y2]="layout().axis" />
          <svg:text x="0" [attr.y]="layout().axis + 20">AUC</svg:text>
          @for (tick of ticks(); track tick.value) {
            <svg:line class="axis" [attr.x1]="tick.x" [attr.x2]="tick.x" [attr.y1]="layout().axis" [attr.y2]="layout().axis + 5" />
            <svg:text class="middle" [attr.x]="tick.x" [attr.y]="layout().axis + 20">{{ tick.text }}</svg:text>
          }
        </svg>
      </ts-figure>
    </div>
  `,
  styles: `
    :host {
      display: block;
      min-width: 0;
    }
    svg {
      display: block;
    }
    .reach {
      fill: transparent;
    }
    .interval {
      fill: none;
      stroke: var(--ts-ink-2);
      stroke-width: 1.6;
    }
    .axis {
      stroke: var(--ts-ink-2);
    }
    .cover {
      fill: var(--ts-sunk);
      stroke: var(--ts-ahead);
      stroke-dasharray: 3 4;
    }
    .end {
      text-anchor: end;
    }
    .middle {
      text-anchor: middle;
    }
    .ts-point:focus-visible {
      outline: none;
    }
    .ts-point:focus-visible .reach {
      stroke: var(--ts-primary);
      stroke-width: 2;
    }
  `,
})
export class AucFigure {
  readonly performance = input.required<readonly PartitionAuc[]>();
  /** Out-of-time rows exist and nobody has opened their figures. */
  readonly covered = input(false);

  protected readonly width = signal(780);
  protected readonly finding = computed(() => performanceFinding(this.performance()));
  private readonly listed = computed(() => {
    const given = this.performance();
    return partitions.flatMap((partition) => {
      const at = given.find((entry) => entry.partition === partition) ?? null;
      return at === null && !(partition === 'outOfTime' && this.covered()) ? [] : [{ partition, at }];
    });
  });
  protected readonly layout = computed(() => {
    const width = Math.max(300, this.width());
    const axis = 8 + this.listed().length * rowHeight;
    const narrow = width < 560;
    return { width, left: narrow ? 92 : 130, right: width - (narrow ? 146 : 180), axis, height: axis + 26 };
  });
  private readonly x = computed(() => {
    const given = this.performance();
    const low = Math.min(...given.map(({ lower, auc }) => lower ?? auc));
    const high = Math.max(...given.map(({ upper, auc }) => upper ?? auc));
    const { left, right } = this.layout();
    return scaleLinear()
      .domain(given.length === 0 ? [0.5, 1] : [low - 0.01, high + 0.01])
      .nice(4)
      .range([left, right]);
  });
  protected readonly ticks = computed(() => {
    const x = this.x();
    const most = Math.max(2, Math.floor((this.layout().right - this.layout().left) / 60));
    return x.ticks(most).map((value) => ({ value, x: x(value), text: fixed(value, 2) }));
  });
  protected readonly rows = computed(() => {
    const x = this.x();
    return this.listed().map(({ partition, at }, i) => {
      const y = 8 + (i + 0.5) * rowHeight;
      const ends = at && at.lower !== null && at.upper !== null ? { from: x(at.lower), to: x(at.upper) } : null;
      return {
        partition,
        name: partitionName(partition),
        y,
        x: at ? x(at.auc) : 0,
        words: at ? aucWords(at) : null,
        mark: partitionPath(partition, 6),
        interval: ends ? `M${ends.from} ${y - 6}v12M${ends.from} ${y}H${ends.to}M${ends.to} ${y - 6}v12` : null,
      };
    });
  });
  protected readonly table = computed<FigureTable<PartitionAuc>>(() => ({ columns: measures, rows: this.performance() }));
}

/** The measures of the performance, by partition; used as the figure's table and beside it. */
export const measures: readonly Column<PartitionAuc>[] = [
  { key: 'partition', label: 'Partition', value: (row) => partitionName(row.partition) },
  { key: 'rows', label: 'Goods and bads', kind: 'count', value: (row) => row.rows },
  { key: 'bads', label: 'Bads', kind: 'count', value: (row) => row.bads, format: (row) => `${count(row.bads)} (${share(row.bads / (row.goods + row.bads))})` },
  { key: 'auc', label: 'AUC', kind: 'metric', value: (row) => row.auc },
  { key: 'lower', label: 'AUC from', unit: '95 %', kind: 'metric', value: (row) => row.lower },
  { key: 'upper', label: 'AUC to', unit: '95 %', kind: 'metric', value: (row) => row.upper },
  { key: 'gini', label: 'Gini', kind: 'metric', value: (row) => 2 * row.auc - 1 },
  { key: 'ks', label: 'KS', kind: 'metric', value: (row) => row.ks },
  { key: 'brier', label: 'Brier', kind: 'metric', value: (row) => row.brier, format: (row) => metric(row.brier) },
  { key: 'large', label: 'Calibration in the large', unit: '0 is calibrated', kind: 'number', decimals: 3, value: (row) => row.calibrationInTheLarge },
  { key: 'slope', label: 'Calibration slope', unit: '1 is calibrated', kind: 'number', decimals: 2, value: (row) => row.calibrationSlope },
  {
    key: 'hl',
    label: 'Hosmer-Lemeshow',
    unit: 'statistic on degrees of freedom, p',
    kind: 'number',
    value: (row) => row.hosmerLemeshow?.statistic ?? null,
    format: hosmerLemeshowWords,
  },
];
