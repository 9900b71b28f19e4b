import { ChangeDetectionStrategy, Component, computed, input, signal } from '@angular/core';
import type { Correlations } from '@tallystone/contracts/binnings/correlations';
import type { Column } from '../../../ui/column';
import { ElementWidth } from '../../../ui/element-width';
import { FigureFrame, FigurePoint } from '../../../ui/figure-frame';
import { fixed } from '../../../ui/numbers';
import type { CorrelationReading, Pair } from './correlation-reading';

/** Weaker than this is a dot that says nothing. */
const shownFrom = 0.1;
/** Height that a name needs. */
const lineOfText = 15; // px

/** A place in the drawing: both count in the order in which names are drawn, and the column comes before the row. */
interface Cell {
  readonly row: number;
  readonly column: number;
}

const isAfter = (one: Cell, other: Cell): boolean => one.row > other.row || (one.row === other.row && one.column > other.column);

/**
 * The lower triangle of a correlation matrix, near ones side by side: a square's side is the correlation, filled where two rise together, hollow
 * where one falls as the other rises; pairs at the threshold are marked. One cell is looked at, with the names of its row and its column: arrow keys and
 * the pointer move it over all cells, Page Up and Page Down over the marked ones.
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
          (pointermove)="look($event)"
        >
          @for (line of drawing.lines; track $index) {
            <svg:line class="rule" [attr.x1]="drawing.left" [attr.x2]="line.x2" [attr.y1]="line.y" [attr.y2]="line.y" />
          }
          <svg:path class="together" [attr.d]="drawing.together" />
          <svg:path class="against" [attr.d]="drawing.against" />
          <svg:path class="flagged" [attr.d]="drawing.flagged" />
          @for (label of labels(); track label.place) {
            <svg:text
              class="ts-label"
              text-anchor="end"
              [class.looked]="label.looked"
              [attr.x]="drawing.left - 8"
              [attr.y]="label.y"
            >
              {{ label.text }}
            </svg:text>
          }
          @if (cell(); as cell) {
            <svg:path class="guide" [attr.d]="cell.guide" />
            <svg:rect
              class="cell"
              [tsPoint]="cell.label"
              [attr.x]="cell.x"
              [attr.y]="cell.y"
              [attr.width]="drawing.step"
              [attr.height]="drawing.step"
              (keydown)="go($event)"
            />
          }
        </svg>
      </div>
    </ts-figure>
    <p class="ts-hidden" aria-live="polite">{{ said() }}</p>
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
      fill: none;
      stroke: var(--ts-ochre-mark);
      stroke-width: 2;
    }
    .guide {
      fill: none;
      stroke: var(--ts-primary);
      opacity: 0.5;
      pointer-events: none;
    }
    .cell {
      fill: transparent;
      stroke: var(--ts-primary);
      stroke-width: 2;
    }
    .looked {
      font-weight: 600;
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
    const longest = Math.min(this.wide() < 520 ? 14 : 26, Math.max(4, ...names.map(({ length }) => length)));
    const left = longest * 7.6 + 14;
    const size = Math.min(this.wide(), 900);
    // Few names have a line each, and the drawing scrolls inside its frame where the window is narrower; of many, some are named.
    const least = names.length > 40 ? 4 : 17;
    const step = Math.max(least, Math.min(26, (size - left - 26) / Math.max(1, names.length)));
    const strong = new Set(pairs.filter(({ flagged }) => flagged).map(({ key }) => key));
    let [together, against, flagged] = ['', '', ''];
    const marked: Cell[] = [];
    for (let j = 1; j < order.length; j++) {
      for (let k = 0; k < j; k++) {
        const value = matrix[order[j]][order[k]];
        const [x, y] = [left + k * step, j * step + 4];
        // A pair is named in the order of the list, which is another than the drawing's.
        const [first, second] = [Math.min(order[j], order[k]), Math.max(order[j], order[k])];
        if (strong.has(`${characteristics[first].column}|${characteristics[second].column}`)) {
          marked.push({ row: j, column: k });
          flagged += `M${x} ${y}h${step}v${step}h${-step}z`;
        }
        if (value === null || Math.abs(value) < shownFrom) continue;
        const side = Math.abs(value) * Math.max(1, step - 3);
        const gap = (step - side) / 2;
        const square = `M${x + gap} ${y + gap}h${side}v${side}h${-side}z`;
        if (value > 0) together += square;
        else against += square;
      }
    }
    return {
      left,
      names,
      width: Math.max(left + names.length * step + 26, 160),
      height: names.length * step + 12,
      step,
      together,
      against,
      flagged,
      marked,
      lines: order.map((_, j) => ({ y: (j + 1) * step + 4, x2: left + (j + 1) * step })),
      short: names.map((name) => (name.length > longest ? `${name.slice(0, longest - 1)}…` : name)),
    };
  });

  private readonly asked = signal<Cell | null>(null);
  /** The cell that is looked at: the first marked one until another is. */
  private readonly at = computed<Cell | null>(() => {
    const { names, marked } = this.geometry();
    const asked = this.asked();
    if (asked && asked.row < names.length) return asked;
    return marked[0] ?? (names.length > 1 ? { row: 1, column: 0 } : null);
  });
  protected readonly said = signal('');

  protected readonly cell = computed(() => {
    const at = this.at();
    if (!at) return null;
    const { left, step } = this.geometry();
    const [x, y] = [left + at.column * step, at.row * step + 4];
    // From the name of the row to the cell, and up to where the column's own row ends.
    const guide = `M${left} ${y + step / 2}H${x}M${x + step / 2} ${y}V${(at.column + 1) * step + 4}`;
    return { x, y, guide, label: this.words(at) };
  });

  /** Names of the row and the column that are looked at, and as many of the others as there is room for. */
  protected readonly labels = computed(() => {
    const { names, short, step } = this.geometry();
    const at = this.at();
    const looked = at ? [at.row, at.column] : [];
    const every = Math.max(1, Math.ceil(lineOfText / step));
    const shown: number[] = [];
    const room = (place: number): boolean =>
      shown.every((other) => Math.abs(other - place) * step >= Math.min(lineOfText, step * every));
    for (const place of looked) if (place === looked[0] || room(place)) shown.push(place);
    for (let place = 0; place < names.length; place += every) if (room(place)) shown.push(place);
    return shown.map((place) => ({
      place,
      text: short[place],
      looked: every > 1 && looked.includes(place),
      y: place * step + step / 2 + 9,
    }));
  });

  protected go(event: KeyboardEvent): void {
    const at = this.at();
    if (!at) return;
    const { names, marked } = this.geometry();
    const last = names.length - 1;
    let { row, column } = at;
    switch (event.key) {
      case 'ArrowRight':
        column = Math.min(row - 1, column + 1);
        break;
      case 'ArrowLeft':
        column = Math.max(0, column - 1);
        break;
      case 'ArrowDown':
        row = Math.min(last, row + 1);
        break;
      case 'ArrowUp':
        row = Math.max(column + 1, row - 1);
        break;
      case 'Home':
        column = 0;
        break;
      case 'End':
        column = row - 1;
        break;
      case 'PageDown':
        ({ row, column } = marked.find((one) => isAfter(one, at)) ?? at);
        break;
      case 'PageUp':
        ({ row, column } = marked.findLast((one) => isAfter(at, one)) ?? at);
        break;
      default:
        return;
    }
    event.preventDefault();
    this.asked.set({ row, column });
    this.said.set(this.words({ row, column }));
  }

  protected look(event: PointerEvent): void {
    const svg = event.currentTarget as SVGSVGElement;
    const box = svg.getBoundingClientRect();
    const { left, step, width, names } = this.geometry();
    const scale = box.width > 0 ? width / box.width : 1;
    const column = Math.floor(((event.clientX - box.left) * scale - left) / step);
    const row = Math.floor(((event.clientY - box.top) * scale - 4) / step);
    if (column >= 0 && column < row && row < names.length) this.asked.set({ row, column });
  }

  private words({ row, column }: Cell): string {
    const { characteristics, matrix } = this.correlations();
    const { order } = this.reading();
    const value = matrix[order[row]][order[column]];
    const names = `${characteristics[order[column]].column} and ${characteristics[order[row]].column}`;
    return `${names}: ${value === null ? 'not known' : fixed(value, 2)}`;
  }

  protected readonly table = computed(() => {
    const columns: Column<Pair>[] = [
      { key: 'first', label: 'Characteristic', value: (row) => row.first },
      { key: 'second', label: 'With', value: (row) => row.second },
      { key: 'correlation', label: 'Correlation', kind: 'number', decimals: 3, value: (row) => row.correlation },
    ];
    return { columns, rows: this.reading().pairs };
  });
}
