import { ChangeDetectionStrategy, Component, computed, input, signal } from '@angular/core';
import type { ColumnQualityDetail, QualityGroup } from '@tallystone/contracts/samples/quality';
import { scaleLinear } from 'd3-scale';
import type { Column } from '../../../ui/column';
import { ElementWidth } from '../../../ui/element-width';
import { FigureFrame, FigurePoint } from '../../../ui/figure-frame';
import { DASH, binWords, count, plural, share } from '../../../ui/numbers';

const rowHeight = 34;
const badRate = ({ goods, bads }: QualityGroup): number | null => (goods + bads === 0 ? null : bads / (goods + bads));

/** How the rows of one column lie, group by group, each with its bad rate. */
@Component({
  selector: 'ts-quality-groups',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [ElementWidth, FigureFrame, FigurePoint],
  template: `
    <ts-figure
      [title]="detail().column"
      note="rows, bad rate"
      [finding]="finding()"
      [table]="{ columns: columns, rows: detail().groups }"
    >
      <div (tsWidth)="width.set($event)">
        <svg [attr.viewBox]="'0 0 ' + width() + ' ' + height()" [attr.width]="width()" [attr.height]="height()">
          @for (row of rows(); track row.label) {
            <svg:text x="0" [attr.y]="row.y + 14" class="ts-label">{{ row.label }}</svg:text>
            <svg:text [attr.x]="width()" [attr.y]="row.y + 14" text-anchor="end">{{ row.figures }}</svg:text>
            <svg:rect
              [tsPoint]="row.words"
              tsPointSeries="groups"
              class="bar"
              x="0"
              [attr.y]="row.y + 20"
              [attr.width]="row.width"
              height="7"
            />
          }
        </svg>
      </div>
    </ts-figure>
  `,
  styles: `
    .bar {
      fill: var(--ts-primary);
    }
  `,
})
export class QualityGroups {
  readonly detail = input.required<ColumnQualityDetail>();
  protected readonly width = signal(340);
  protected readonly height = computed(() => this.detail().groups.length * rowHeight + 4);
  private readonly all = computed(() => this.detail().groups.reduce((sum, { rows }) => sum + rows, 0));
  protected readonly columns: readonly Column<QualityGroup>[] = [
    { key: 'group', label: 'Group', value: (row) => row.label, format: (row) => binWords(row.label) },
    { key: 'rows', label: 'Rows', kind: 'count', value: (row) => row.rows },
    { key: 'goods', label: 'Goods', kind: 'count', value: (row) => row.goods },
    { key: 'bads', label: 'Bads', kind: 'count', value: (row) => row.bads },
    { key: 'unknown', label: 'Not told', kind: 'count', value: (row) => row.unknown },
    { key: 'rate', label: 'Bad rate', kind: 'share', value: badRate },
  ];
  protected readonly rows = computed(() => {
    const groups = this.detail().groups;
    const length = scaleLinear()
      .domain([0, Math.max(1, ...groups.map(({ rows }) => rows))])
      .range([0, this.width()]);
    return groups.map((group, place) => {
      const label = binWords(group.label);
      const rate = badRate(group);
      return {
        label: label.length > 26 ? `${label.slice(0, 25)}…` : label,
        figures: `${share(group.rows / Math.max(1, this.all()), 1)}, ${rate === null ? DASH : share(rate)}`,
        words: `${label}: ${plural(group.rows, 'row')}, ${rate === null ? 'bad rate not told' : `bad rate ${share(rate)}`}`,
        y: place * rowHeight,
        width: Math.max(1, length(group.rows)),
      };
    });
  });
  protected readonly finding = computed(() => {
    const known = this.detail().groups.filter((group) => group.goods + group.bads >= 30);
    if (known.length < 2) return 'Too few rows with an outcome to compare groups.';
    const sorted = [...known].sort((a, b) => (badRate(a) ?? 0) - (badRate(b) ?? 0));
    const [least, most] = [sorted[0], sorted[sorted.length - 1]];
    return `Bad rate from ${share(badRate(least))} (${binWords(least.label)}) to ${share(badRate(most))} (${binWords(most.label)}); ${count(this.all())} rows.`;
  });
}
