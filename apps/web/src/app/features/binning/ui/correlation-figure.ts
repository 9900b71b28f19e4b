import { ChangeDetectionStrategy, Component, computed, input, signal } from '@angular/core';
import type { Correlations } from '@tallystone/contracts/binnings/correlations';
import type { Column } from '../../../ui/column';
import { ElementWidth } from '../../../ui/element-width';
import { FigureFrame, FigurePoint } from '../../../ui/figure-frame';
import { fixed } from '../../../ui/numbers';
import type { CorrelationReading, Pair } from './correlation-reading';

/** Weaker than this is a dot that says nothing. */
const shownFrom = 0.1;
const labelled = 40;

/**
 * The lower triangle of a correlation matrix, near ones side by side: a square's side is the correlation, filled where two rise together, hollow
 * where one falls as the other rises; pairs at the threshold are marked and reached by keys.
 */
@Component({
  selector: 'ts-correlation-figure',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [ElementWidth, FigureFrame, FigurePoint],
  template: `
    <ts-figure title="Correlation of WOE, near ones side by side" [finding]="finding()" [table]="table()">
      <div (tsWidth)="wide.set($event)">
        @let drawing = geometry();
        <svg
          [attr.viewBox]="'0 0 ' + drawing.width + ' ' + drawing.height"
          [attr.width]="drawing.width"
          [attr.height]="drawing.height"
        >
          @for (line of drawing.lines; track $index) {
            <svg:line class="rule" [attr.x1]="drawing.left" [attr.x2]="line.x2" [attr.y1]="line.y" [attr.y2]="line.y" />
          }
          <svg:path class="together" [attr.d]="drawing.together" />
          <svg:path class="against" [attr.d]="drawing.against" />
          @for (mark of drawing.marks; track mark.key) {
            <svg:rect
              class="flagged"
              [tsPoint]="mark.label"
              [attr.x]="mark.x"
              [attr.y]="mark.y"
              [attr.width]="drawing.step"
              [attr.height]="drawing.step"
            />
          }
          @for (label of drawing.labels; track label.text) {
            <svg:text class="ts-label" text-anchor="end" [attr.x]="drawing.left - 8" [attr.y]="label.y">
              {{ label.text }}
            </svg:text>
            <svg:text [attr.x]="label.x" [attr.y]="label.y">{{ label.number }}</svg:text>
          }
        </svg>
      </div>
    </ts-figure>
  `,
  styles: `
    svg {
      display: block;
    }
    .rule {
      stroke: var(--ts-hairline);
    }
    .together {
      fill: var(--ts-ink-2);
    }
    .against {
      fill: none;
      stroke: var(--ts-ink-2);
      stroke-width: 1.5;
    }
    .flagged {
      fill: transparent;
      stroke: var(--ts-ochre-mark);
      stroke-width: 2;
    }
  `,
})
export class CorrelationFigure {
  readonly correlations = input.required<Pick<Correlations, 'characteristics' | 'matrix'>>();
  readonly reading = input.required<CorrelationReading>();
  readonly finding = input<string | null>(null);
  protected readonly wide = signal(720);

  protected readonly geometry = computed(() => {
    const { characteristics, matrix } = this.correlations();
    const { order, pairs } = this.reading();
    const names = order.map((place) => characteristics[place].column);
    const narrow = this.wide() < 520;
    const longest = Math.min(narrow ? 14 : 26, Math.max(4, ...names.map(({ length }) => length)));
    const left = names.length > labelled ? 30 : longest * 7.6 + 14;
    const size = Math.min(this.wide(), 900);
    // Names need their lines: where the window is narrower than that, the drawing scrolls inside its frame.
    const least = names.length > labelled ? 3 : 17;
    const step = Math.max(least, Math.min(26, (size - left - 26) / Math.max(1, names.length)));
    let [together, against] = ['', ''];
    const places = new Map<string, { x: number; y: number }>();
    for (let j = 1; j < order.length; j++) {
      for (let k = 0; k < j; k++) {
        const value = matrix[order[j]][order[k]];
        const [x, y] = [left + k * step, j * step + 4];
        places.set([characteristics[order[j]].column, characteristics[order[k]].column].sort().join('|'), { x, y });
        if (value === null || Math.abs(value) < shownFrom) continue;
        const side = Math.abs(value) * (step - 3);
        const gap = (step - side) / 2;
        const square = `M${x + gap} ${y + gap}h${side}v${side}h${-side}z`;
        if (value > 0) together += square;
        else against += square;
      }
    }
    return {
      left,
      width: Math.max(left + names.length * step + 26, 160),
      height: names.length * step + 12,
      step,
      together,
      against,
      lines: order.map((_, j) => ({ y: (j + 1) * step + 4, x2: left + (j + 1) * step })),
      marks: pairs
        .filter(({ flagged }) => flagged)
        .flatMap((pair) => {
          const at = places.get([pair.first, pair.second].sort().join('|'));
          return at ? [{ key: pair.key, ...at, label: `${pair.first} and ${pair.second}: ${fixed(pair.correlation, 2)}` }] : [];
        }),
      labels:
        names.length > labelled
          ? []
          : names.map((name, j) => ({
              text: name.length > longest ? `${name.slice(0, longest - 1)}…` : name,
              number: '',
              x: left + j * step + 4,
              y: j * step + step / 2 + 9,
            })),
    };
  });

  protected readonly table = computed(() => {
    const columns: Column<Pair>[] = [
      { key: 'first', label: 'Characteristic', value: (row) => row.first },
      { key: 'second', label: 'With', value: (row) => row.second },
      { key: 'correlation', label: 'Correlation', kind: 'number', decimals: 3, value: (row) => row.correlation },
    ];
    return { columns, rows: this.reading().pairs };
  });
}
