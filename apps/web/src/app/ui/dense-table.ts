import { NgTemplateOutlet } from '@angular/common';
import {
  ChangeDetectionStrategy,
  Component,
  Directive,
  type ElementRef,
  TemplateRef,
  computed,
  contentChildren,
  inject,
  input,
  model,
  output,
  signal,
  viewChild,
} from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { MatIconModule } from '@angular/material/icon';
import { RouterLink } from '@angular/router';
import { type Column, cellText, headerText, isNumeric, sorted } from './column';
import { csv } from './csv';
import { plural } from './numbers';
import { fileName, saveFile } from './save-file';

/** Above this many rows only those in view are in the page. */
const windowFrom = 200;
const rowHeight = 33; // px; fixed while rows are windowed, so that the scroll bar tells the truth
const spare = 12; // rows kept ready above and below the view

/**
 * The content of one column's cells, where text is not enough. Give the rows as well, and `row` has their type.
 *
 * @example <ng-template tsCell="state" [tsCellRows]="fits()" let-row><ts-status tone="kept">{{ row.state }}</ts-status></ng-template>
 */
@Directive({ selector: 'ng-template[tsCell]' })
export class CellTemplate<Row> {
  readonly tsCell = input.required<string>();
  /** Only for the type of `row`. */
  readonly tsCellRows = input<readonly Row[]>();
  readonly template = inject<TemplateRef<{ $implicit: unknown }>>(TemplateRef);

  static ngTemplateContextGuard<Row>(_cell: CellTemplate<Row>, _context: unknown): _context is { $implicit: Row } {
    return true;
  }
}

export interface TableSort {
  readonly key: string;
  readonly descending: boolean;
}

/**
 * The dense table for people who compare: header and first column stay in sight, figures stand right, units are in the header, a dash
 * is "missing", everything copies as CSV at full precision, and long tables keep only the rows in view in the page.
 *
 * @example <ts-table caption="Fits of this model" [columns]="columns" [rows]="fits()" [identify]="byId" [(sort)]="sort" />
 */
@Component({
  selector: 'ts-table',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [NgTemplateOutlet, RouterLink, MatButtonModule, MatIconModule],
  templateUrl: './dense-table.html',
  styleUrl: './dense-table.scss',
})
export class DenseTable<Row> {
  /** What the table holds, for assistive technology and for the file's name; shown when `showCaption`. */
  readonly caption = input.required<string>();
  readonly columns = input.required<readonly Column<Row>[]>();
  readonly rows = input.required<readonly Row[]>();
  /** What makes a row the same row; its position unless told. */
  readonly identify = input<(row: Row) => string>();
  readonly showCaption = input(false);
  readonly copyable = input(true);
  /** Rows set back, such as characteristics that were not kept. */
  readonly quiet = input<(row: Row) => boolean>();
  readonly selected = input<(row: Row) => boolean>();
  /**
   * On a narrow screen the cells of a row stand below each other, where texts are too long to be read across. For tables that nobody sorts, since there is
   * no header to press; not while rows are windowed.
   */
  readonly stacks = input(false);
  /** What to say when there are no rows. */
  readonly empty = input('Nothing here yet.');
  readonly sort = model<TableSort | null>(null);
  /** A row was pressed or Enter was hit on it; rows take the keyboard only when `activatable`. */
  readonly activatable = input(false);
  readonly activate = output<Row>();

  private readonly cells = contentChildren<CellTemplate<Row>>(CellTemplate);
  private readonly scroller = viewChild.required<ElementRef<HTMLElement>>('scroller');
  private readonly top = signal(0);
  private readonly viewHeight = signal(560);
  protected readonly copied = signal(false);

  protected readonly templates = computed(() => new Map(this.cells().map((cell) => [cell.tsCell(), cell.template])));
  protected readonly ordered = computed(() => {
    const sort = this.sort();
    const column = sort && this.columns().find((entry) => entry.key === sort.key);
    return sort && column ? sorted(this.rows(), column, sort.descending) : this.rows();
  });
  /** A table of figures, each with its name in front. */
  protected readonly figures = computed(() => this.columns().length > 1 && this.columns().slice(1).every(isNumeric));
  protected readonly windowed = computed(() => this.rows().length > windowFrom);
  protected readonly stacked = computed(() => this.stacks() && !this.windowed());
  protected readonly first = computed(() => (this.windowed() ? Math.max(0, Math.floor(this.top() / rowHeight) - spare) : 0));
  protected readonly shown = computed(() => {
    if (!this.windowed()) return this.ordered();
    const first = this.first();
    return this.ordered().slice(first, first + Math.ceil(this.viewHeight() / rowHeight) + 2 * spare);
  });
  protected readonly above = computed(() => this.first() * rowHeight);
  protected readonly below = computed(() => (this.ordered().length - this.first() - this.shown().length) * rowHeight);

  /** While rows come and go the widths must not: each column is as wide as its longest text. */
  protected readonly widths = computed<readonly (number | null)[]>(() =>
    this.columns().map((column) => {
      if (!this.windowed()) return null;
      let longest = Math.max(column.label.length, column.unit?.length ?? 0);
      for (const row of this.rows()) longest = Math.max(longest, cellText(column, row).length);
      return Math.min(longest, column.width ?? 28) + 3;
    }),
  );

  protected readonly cellText = cellText;
  protected readonly isNumeric = isNumeric;
  protected readonly count = computed(() => plural(this.rows().length, 'row'));

  protected trackBy(index: number, row: Row): unknown {
    return this.identify()?.(row) ?? index;
  }

  protected scrolled(): void {
    if (!this.windowed()) return;
    const element = this.scroller().nativeElement;
    this.top.set(element.scrollTop);
    this.viewHeight.set(element.clientHeight);
  }

  protected sortBy(column: Column<Row>): void {
    const sort = this.sort();
    const same = sort?.key === column.key;
    // Figures are read from the largest down, names from A on; a third press gives the given order back.
    const startsDescending = isNumeric(column);
    if (!same) this.sort.set({ key: column.key, descending: startsDescending });
    else if (sort?.descending === startsDescending) this.sort.set({ key: column.key, descending: !startsDescending });
    else this.sort.set(null);
  }

  protected ariaSort(column: Column<Row>): 'ascending' | 'descending' | 'none' | null {
    if (!column.sortable) return null;
    const sort = this.sort();
    if (sort?.key !== column.key) return 'none';
    return sort.descending ? 'descending' : 'ascending';
  }

  /** The rows as shown, every value at full precision. */
  asCsv(): string {
    const columns = this.columns();
    return csv(
      columns.map(headerText),
      this.ordered().map((row) => columns.map((column) => column.value(row))),
    );
  }

  protected async copy(): Promise<void> {
    await navigator.clipboard.writeText(this.asCsv());
    this.copied.set(true);
    setTimeout(() => this.copied.set(false), 2500);
  }

  protected save(): void {
    saveFile(fileName(this.caption(), 'csv'), this.asCsv(), 'text/csv;charset=utf-8');
  }

  protected pressed(row: Row, event: Event): void {
    if (!this.activatable()) return;
    // A link or button inside the row does its own work.
    if ((event.target as HTMLElement).closest('a, button, input, mat-checkbox') !== null) return;
    this.activate.emit(row);
  }
}
