import { ChangeDetectionStrategy, Component, computed, input, signal } from '@angular/core';
import type { ColumnQualityDetail } from '@tallystone/contracts/samples/quality';
import { scaleBand } from 'd3-scale';
import type { Column } from '../../../ui/column';
import { ElementWidth } from '../../../ui/element-width';
import { FigureFrame, FigurePoint } from '../../../ui/figure-frame';
import { binWords, plural, share } from '../../../ui/numbers';
import { type GroupCell, groupCells, moveFinding } from './group-cells';
import { monthTicks } from './month-ticks';

const rowHeight = 22;
const axisHeight = 22;

/** How the values of one column lie month by month: the share of each group of the month's rows, darker for more. */
@Component({
  selector: 'ts-quality-group-months',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [ElementWidth, FigureFrame, FigurePoint],
  template: `
    <ts-figure
      title="Values by month"
      note="share of the month's rows"
      [finding]="finding()"
      [table]="{ columns, rows: cells() }"
    >
      <div (tsWidth)="width.set($event)">
        <svg [attr.viewBox]="'0 0 ' + width() + ' ' + height()" [attr.width]="width()" [attr.height]="height()">
          @for (name of names(); track name.y) {
            <svg:text x="0" [attr.y]="name.y" class="ts-label">{{ name.text }}</svg:text>
          }
          @for (mark of marks(); track mark.key) {
            <svg:rect
              [tsPoint]="mark.words"
              [tsPointSeries]="mark.series"
              class="cell"
              [attr.x]="mark.x"
              [attr.y]="mark.y"
              [attr.width]="mark.width"
              [attr.height]="mark.height"
              [attr.fill-opacity]="mark.depth"
            />
          }
          @for (tick of ticks(); track tick.month) {
            <svg:text [attr.x]="tick.x" [attr.y]="height() - 6" [attr.text-anchor]="tick.anchor">{{ tick.month }}</svg:text>
          }
        </svg>
      </div>
    </ts-figure>
  `,
  styles: `
    .cell {
      fill: var(--ts-primary);
    }
  `,
})
export class QualityGroupMonths {
  readonly detail = input.required<ColumnQualityDetail>();
  protected readonly width = signal(640);
  protected readonly columns: readonly Column<GroupCell>[] = [
    { key: 'group', label: 'Group', value: (row) => row.group, format: (row) => binWords(row.group) },
    { key: 'month', label: 'Month', value: (row) => row.month },
    { key: 'rows', label: 'Rows', kind: 'count', value: (row) => row.rows },
    { key: 'share', label: 'Share of the month', kind: 'share', value: (row) => row.share },
  ];
  protected readonly cells = computed(() => groupCells(this.detail()));
  protected readonly height = computed(() => this.detail().groups.length * rowHeight + axisHeight);
  /** Room for the names of groups: less where there is little. */
  private readonly left = computed(() => Math.min(150, this.width() * 0.3));
  private readonly x = computed(() =>
    scaleBand<string>()
      .domain(this.detail().months.map(({ month }) => month))
      .range([this.left(), this.width()])
      .paddingInner(0.12),
  );
  protected readonly names = computed(() => {
    const most = Math.max(4, Math.floor(this.left() / 7));
    return this.detail().groups.map(({ label }, place) => {
      const text = binWords(label);
      return { text: text.length > most ? `${text.slice(0, most - 1)}…` : text, y: place * rowHeight + 15 };
    });
  });
  protected readonly marks = computed(() => {
    const x = this.x();
    const most = Math.max(...this.cells().map((cell) => cell.share), Number.MIN_VALUE);
    return this.cells()
      .filter(({ rows }) => rows > 0)
      .map((cell) => ({
        key: `${cell.place}|${cell.month}`,
        series: String(cell.place),
        words: `${binWords(cell.group)}, ${cell.month}: ${share(cell.share, 1)}, ${plural(cell.rows, 'row')}`,
        x: x(cell.month) ?? 0,
        y: cell.place * rowHeight + 1,
        width: Math.max(1, x.bandwidth()),
        height: rowHeight - 2,
        depth: (0.08 + (0.92 * cell.share) / most).toFixed(3),
      }));
  });
  protected readonly ticks = computed(() => monthTicks(this.x()));
  protected readonly finding = computed(() => moveFinding(this.cells()));
}
