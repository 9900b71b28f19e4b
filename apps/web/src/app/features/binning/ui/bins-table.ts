import { ChangeDetectionStrategy, Component, computed, input, model, output } from '@angular/core';
import type { BenchReading, PartitionName } from '@tallystone/numeric/bench';
import { DASH, fixed, share, woe } from '../../../ui/numbers';
import { partitionName } from '../../../ui/partition-mark';
import { type DrawnBin, sizes } from './geometry';

interface TableRow {
  readonly label: string;
  readonly cells: readonly string[];
  readonly strong?: boolean;
}

/** The table under the figure, each column as wide as its bin. Its heads select a bin. */
@Component({
  selector: 'ts-bins-table',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <table [style.width.px]="width()">
      <caption class="ts-hidden">
        Bins,
        {{
          partitionLabel()
        }}
      </caption>
      <colgroup>
        @for (column of widths(); track $index) {
          <col [style.width.px]="column" />
        }
      </colgroup>
      <thead>
        <tr>
          <th scope="col">Bin</th>
          @for (column of spaced(); track $index) {
            @if (column === null) {
              <td></td>
            } @else if (column.bin === null) {
              <th scope="col" class="joined">
                <span [title]="column.label">{{ column.label }}</span>
              </th>
            } @else {
              <th scope="col">
                <button
                  type="button"
                  [attr.aria-pressed]="selected() === column.bin"
                  [attr.aria-label]="column.label"
                  [title]="column.label"
                  (click)="toggle(column.bin)"
                  (keydown)="pressed.emit({ bin: column.bin, event: $event })"
                >
                  {{ column.label }}
                </button>
              </th>
            }
          }
        </tr>
      </thead>
      <tbody>
        @for (row of rows(); track row.label) {
          <tr>
            <th scope="row">{{ row.label }}</th>
            @for (cell of row.cells; track $index) {
              @if (isCutOff($index, cell)) {
                <td [class.selected]="isSelected($index)" [attr.aria-label]="cell" [title]="cell">…</td>
              } @else {
                <td [class.selected]="isSelected($index)">{{ cell }}</td>
              }
            }
          </tr>
        }
      </tbody>
    </table>
  `,
  styles: `
    table {
      border-collapse: collapse;
      table-layout: fixed;
      font-size: 14px;
    }
    th,
    td {
      padding: 5px 2px;
      text-align: center;
      font-weight: 400;
      border-bottom: 1px solid var(--ts-hairline);
      white-space: nowrap;
      overflow: hidden;
      line-height: 20px;
    }
    th[scope='row'],
    thead th:first-child {
      text-align: left;
      padding-left: 0;
      color: var(--ts-ink);
    }
    thead th {
      padding: 0;
      vertical-align: bottom;
    }
    thead th:first-child {
      padding: 5px 0;
    }
    button,
    .joined span {
      all: unset;
      box-sizing: border-box;
      display: block;
      width: 100%;
      min-height: 30px;
      padding: 5px 2px;
      font-size: 12px;
      line-height: 15px;
      white-space: normal;
      overflow: hidden;
      max-height: 52px;
      overflow-wrap: anywhere;
      color: var(--ts-ink-2);
      text-align: center;
    }
    button {
      cursor: pointer;
    }
    button:hover {
      color: var(--ts-ink);
      background: var(--ts-sunk);
    }
    button:focus-visible {
      outline: 2px solid var(--ts-primary);
      outline-offset: -2px;
    }
    button[aria-pressed='true'] {
      color: var(--ts-ink);
      background: var(--ts-primary-container);
    }
    td.selected {
      background: var(--ts-primary-container);
    }
  `,
})
export class BinsTable {
  readonly columns = input.required<readonly DrawnBin[]>();
  readonly reading = input.required<BenchReading>();
  readonly width = input.required<number>();
  readonly partition = input<PartitionName>('development');
  readonly selected = model<number | null>(null);
  /** A key on a bin's head, for the shortcuts of the bench. */
  readonly pressed = output<{ bin: number; event: KeyboardEvent }>();

  protected readonly partitionLabel = computed(() => partitionName(this.partition()));

  /** Columns with the gaps between them (null), so that each stands under its bin. */
  protected readonly spaced = computed<readonly (DrawnBin | null)[]>(() => {
    const spaced: (DrawnBin | null)[] = [];
    let x: number = sizes.left;
    for (const column of this.columns()) {
      if (column.x0 - x > 0.5) spaced.push(null);
      spaced.push(column);
      x = column.x1;
    }
    return spaced;
  });

  protected readonly widths = computed(() => {
    let x: number = sizes.left;
    const widths: number[] = [sizes.left];
    const columns = this.columns();
    let index = 0;
    for (const column of this.spaced()) {
      if (column === null) widths.push(columns[index].x0 - x);
      else {
        widths.push(column.x1 - column.x0);
        x = column.x1;
        index++;
      }
    }
    return widths;
  });

  protected readonly rows = computed<readonly TableRow[]>(() => {
    const { bins } = this.reading();
    const partition = this.partition();
    const row = (label: string, write: (bin: number) => string): TableRow => ({
      label,
      cells: this.spaced().map((column) => (column === null ? '' : column.bin === null ? '' : write(column.bin))),
    });
    const figures = (bin: number) => bins[bin].figures[partition];
    return [
      row('Rows', (bin) => fixed(figures(bin)?.rows, 0)),
      // Weighted where the sample has weights.
      row('Goods', (bin) => fixed(figures(bin)?.goods, 0)),
      row('Bads', (bin) => fixed(figures(bin)?.bads, 0)),
      row('Share', (bin) => share(figures(bin)?.share)),
      row('Bad rate', (bin) => share(figures(bin)?.badRate)),
      row('95 % interval', (bin) => {
        const one = figures(bin);
        return one?.lower == null || one.upper == null
          ? DASH
          : `${share(one.lower, 0).replace(/\s?%$/, '')}–${share(one.upper, 0)}`;
      }),
      row('WOE', (bin) => woe(figures(bin)?.woe)),
      row('IV part', (bin) => woe(figures(bin)?.part)),
    ];
  });

  protected isSelected(index: number): boolean {
    const column = this.spaced()[index];
    return column !== null && column.bin !== null && column.bin === this.selected();
  }

  /** A figure that is cut off would be read as another one: too narrow a bin shows none, and the table view has them all. */
  protected isCutOff(index: number, cell: string): boolean {
    return (this.widths()[index + 1] ?? 0) < cell.length * 6.6 + 4;
  }

  protected toggle(bin: number): void {
    this.selected.set(this.selected() === bin ? null : bin);
  }
}
