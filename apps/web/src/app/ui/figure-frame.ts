import {
  ChangeDetectionStrategy,
  Component,
  Directive,
  ElementRef,
  type Signal,
  afterRenderEffect,
  computed,
  contentChildren,
  inject,
  input,
  signal,
  viewChild,
} from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { MatIconModule } from '@angular/material/icon';
import { MatMenuModule } from '@angular/material/menu';
import { type Column, headerText } from './column';
import { csv } from './csv';
import { DenseTable } from './dense-table';
import { HEADING_LEVEL } from './heading-level';
import { fileName, saveFile } from './save-file';
import { pngOf, svgText } from './svg-export';

/** What a figure shows, as a table: the same numbers, for those who read rather than look. */
export interface FigureTable<Row = unknown> {
  readonly columns: readonly Column<Row>[];
  readonly rows: readonly Row[];
}

/** A table of rows of any shape: the frame only hands them on, and each column reads the rows it was written for. */
type AnyFigureTable = { readonly columns: readonly Column<never>[]; readonly rows: readonly unknown[] };

/**
 * Makes one mark of a chart a point that the keyboard can reach. Left and right go along its series, up and down to the next series.
 *
 * @example <svg:circle tsPoint="32 to 55 %, bad rate 9.9 %" tsPointSeries="development" … />
 */
@Directive({
  selector: '[tsPoint]',
  host: {
    role: 'img',
    class: 'ts-point',
    '[attr.aria-label]': 'tsPoint()',
    '[attr.tabindex]': 'frame.current() === this ? 0 : -1',
    '(focus)': 'frame.reached(this)',
    '(keydown)': 'frame.move($event)',
    '(mouseenter)': 'frame.hover(this)',
    '(mouseleave)': 'frame.hover(null)',
  },
})
export class FigurePoint {
  readonly tsPoint = input.required<string>();
  readonly tsPointSeries = input<string>('');
  readonly element = inject<ElementRef<SVGElement | HTMLElement>>(ElementRef).nativeElement;
  protected readonly frame = inject(FigureFrame);
}

/**
 * The frame every chart stands in: title, the one sentence it shows, the chart or the same numbers as a table, saving as SVG, PNG and
 * CSV, and points that the keyboard reaches. Project one <svg> (or several; they are saved stacked).
 *
 * @example
 * <ts-figure title="Lasso over 100 penalties, ten folds" [finding]="finding()" [table]="table()">
 *   <svg [attr.viewBox]="…">…</svg>
 * </ts-figure>
 */
@Component({
  selector: 'ts-figure',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, MatIconModule, MatMenuModule, DenseTable],
  templateUrl: './figure-frame.html',
  styleUrl: './figure-frame.scss',
})
export class FigureFrame {
  readonly title = input.required<string>();
  readonly finding = input<string | null>(null);
  /** Beside the title, in the second ink: "numeric, rising risk, IV 0.49". */
  readonly note = input<string | null>(null);
  readonly table = input<AnyFigureTable | null>(null);

  private readonly points = contentChildren(FigurePoint, { descendants: true });
  private readonly chart = viewChild<ElementRef<HTMLElement>>('chart');
  private readonly focused = signal<FigurePoint | null>(null);
  private readonly hovered = signal<FigurePoint | null>(null);
  protected readonly numbers = computed(() => this.table() as FigureTable | null);
  protected readonly asTable = signal(false);
  protected readonly failed = signal<string | null>(null);
  protected readonly level = inject(HEADING_LEVEL);

  /** The point that Tab reaches. */
  readonly current: Signal<FigurePoint | null> = computed(() => {
    const points = this.points();
    const focused = this.focused();
    return focused && points.includes(focused) ? focused : (points[0] ?? null);
  });
  protected readonly readout = computed(() => (this.hovered() ?? this.focused())?.tsPoint() ?? null);
  protected readonly hasPoints = computed(() => this.points().length > 0);

  constructor() {
    // The chart is named by its title, so that assistive technology announces what it is about to read.
    afterRenderEffect(() => {
      const svgs = this.chart()?.nativeElement.querySelectorAll('svg') ?? [];
      for (const svg of svgs) {
        if (!svg.hasAttribute('role')) svg.setAttribute('role', 'group');
        if (!svg.hasAttribute('aria-label')) svg.setAttribute('aria-label', this.title());
      }
    });
  }

  reached(point: FigurePoint): void {
    this.focused.set(point);
  }

  hover(point: FigurePoint | null): void {
    this.hovered.set(point);
  }

  protected left(): void {
    this.focused.set(null);
  }

  /** A key was pressed on the current point. */
  move(event: KeyboardEvent): void {
    const points = this.points();
    const current = this.current();
    if (!current) return;
    const series = points.filter((point) => point.tsPointSeries() === current.tsPointSeries());
    const at = series.indexOf(current);
    const names = [...new Set(points.map((point) => point.tsPointSeries()))];
    let next: FigurePoint | undefined;
    if (event.key === 'ArrowRight') next = series[at + 1];
    else if (event.key === 'ArrowLeft') next = series[at - 1];
    else if (event.key === 'Home') next = series[0];
    else if (event.key === 'End') next = series[series.length - 1];
    else if (event.key === 'ArrowUp' || event.key === 'ArrowDown') {
      const other = names[names.indexOf(current.tsPointSeries()) + (event.key === 'ArrowDown' ? 1 : -1)];
      const there = points.filter((point) => point.tsPointSeries() === other);
      next = there[Math.min(at, there.length - 1)];
    } else return;
    event.preventDefault();
    next?.element.focus();
  }

  protected saveSvg(): void {
    saveFile(fileName(this.title(), 'svg'), this.svg(), 'image/svg+xml;charset=utf-8');
  }

  protected async savePng(): Promise<void> {
    try {
      saveFile(fileName(this.title(), 'png'), await pngOf(this.svg()));
    } catch (error) {
      this.failed.set(`The picture could not be made: ${error instanceof Error ? error.message : String(error)}`);
    }
  }

  protected saveCsv(): void {
    const table = this.numbers();
    if (!table) return;
    const rows = table.rows.map((row) => table.columns.map((column) => column.value(row)));
    saveFile(fileName(this.title(), 'csv'), csv(table.columns.map(headerText), rows), 'text/csv;charset=utf-8');
  }

  private svg(): string {
    const svgs = [...(this.chart()?.nativeElement.querySelectorAll('svg') ?? [])];
    return svgText(svgs, this.title(), this.finding());
  }
}
