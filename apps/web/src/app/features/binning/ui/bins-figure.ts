import {
  ChangeDetectionStrategy,
  Component,
  DestroyRef,
  type ElementRef,
  Injector,
  afterNextRender,
  computed,
  inject,
  input,
  model,
  output,
  signal,
  viewChild,
} from '@angular/core';
import {
  groupCategories,
  mergeNumeric,
  moveCut,
  type BenchReading,
  type Bins,
  type EditOf,
  type FineClasses,
  type NumericBins,
  type PartitionName,
} from '@tallystone/numeric/bench';
import { axisBottom, axisLeft } from 'd3-axis';
import type { MakeEdit } from '../bench/history';
import { AxisDirective } from '../../../ui/axis';
import { ElementWidth } from '../../../ui/element-width';
import { FigureFrame, FigurePoint } from '../../../ui/figure-frame';
import { count, share, woe, written } from '../../../ui/numbers';
import { partitionPath } from '../../../ui/partition-mark';
import { BinsTable } from './bins-table';
import { EdgeScroll, frameOf } from './edge-scroll';
import { cutMoves, edgeLetGo, reachOf } from './cut-moves';
import { figuresTable } from './figures-table';
import { type AxisMode, type DrawnCut, categoryOrder, ladderScale, layOut, notchedLine, shownLabels, sizes } from './geometry';
import { ladderOf } from './ladder';
import { shortened } from './shortened';

interface Dragged {
  readonly pointer: number;
  readonly cut: number;
  /** Where the pointer went down. */
  readonly fromX: number;
  readonly moved: boolean;
  /** As they were when the drag began: the edit is against these. */
  readonly bins: NumericBins;
}

type Pointer = Pick<PointerEvent, 'clientX' | 'clientY'>;

interface DraggedCategory {
  readonly pointer: number;
  readonly categories: readonly string[];
  readonly fromX: number;
  /** Where the pointer is. */
  readonly at: Pointer;
  readonly moved: boolean;
  /** Pixels of the drawing that are out of sight at the left. */
  readonly hidden: number;
  /** Group under the pointer, or the empty space beside the groups, where a new one is made. */
  readonly over: number | 'new' | null;
}

/** A pointer that has moved less than this has pressed, not dragged. */
const dragFrom = 4; // px

/**
 * The figure of one characteristic: goods above and bads below one axis, cuts as notches in it, a ladder of log odds and the table, aligned
 * under their bins. Cuts are dragged or moved by keys; categories are chosen and dragged onto a group.
 */
@Component({
  selector: 'ts-bins-figure',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [AxisDirective, BinsTable, ElementWidth, FigureFrame, FigurePoint],
  templateUrl: './bins-figure.html',
  styleUrl: './bins-figure.scss',
})
export class BinsFigure {
  readonly title = input.required<string>();
  readonly note = input<string | null>(null);
  readonly finding = input<string | null>(null);
  readonly fine = input.required<FineClasses>();
  readonly bins = input.required<Bins>();
  readonly reading = input.required<BenchReading>();
  readonly editable = input(false);
  readonly mode = input<AxisMode>('value');
  readonly partition = input<PartitionName>('development');
  /** The cut that keys and the value field act on. */
  readonly cut = model<number | null>(null);
  readonly bin = model<number | null>(null);
  readonly chosen = model<ReadonlySet<string>>(new Set());

  /** Where a drag would lead; null when it is over. */
  readonly previewed = output<Bins | null>();
  readonly edited = output<MakeEdit>();
  /** A value is to be typed for the selected cut. */
  readonly typing = output<void>();
  /** A cut is to go to a round number, which may lie inside a fine class. */
  readonly rounding = output<number>();
  readonly binKey = output<{ bin: number; event: KeyboardEvent }>();

  private readonly injector = inject(Injector);
  private readonly svg = viewChild<ElementRef<SVGSVGElement>>('svg');
  protected readonly wide = signal(960);
  protected readonly dragged = signal<Dragged | null>(null);
  protected readonly carried = signal<DraggedCategory | null>(null);
  private readonly focusedCategory = signal<string | null>(null);
  /** Brings parts of a wide figure under the pointer that cannot be seen where it is dragged from. */
  private readonly scroll = new EdgeScroll(() => {
    const carried = this.carried();
    if (carried) this.carryTo(carried, carried.at);
  });

  protected readonly sizes = sizes;
  protected readonly count = count;
  protected readonly written = written;
  protected readonly geometry = computed(() => layOut(this.fine(), this.bins(), this.reading(), this.wide(), this.mode()));
  protected readonly axisY = computed(() => this.geometry().baseline + sizes.bads + sizes.gap);
  /** Values along the axis; null where classes stand side by side, or categories. */
  protected readonly valueAxis = computed(() => {
    const { values, axis } = this.geometry();
    return (
      values &&
      axisBottom(values)
        .ticks(Math.max(2, Math.floor((axis[1] - axis[0]) / 84)))
        .tickFormat((value) => written(Number(value)))
        .tickSizeInner(5)
    );
  });
  protected readonly valueAxisY = computed(() => this.axisY() + sizes.axis + 6);
  protected readonly ladderTop = computed(
    () => this.axisY() + sizes.axis + sizes.ladderGap + (this.valueAxis() ? sizes.values : 0),
  );
  protected readonly height = computed(() => this.ladderTop() + sizes.ladder + 8);
  protected readonly scale = computed(() => ladderScale(this.reading(), this.ladderTop()));
  protected readonly ladderAxis = computed(() => axisLeft(this.scale()).ticks(5));
  protected readonly line = computed(() =>
    notchedLine(this.geometry().axis, this.numeric() ? this.geometry().cuts : this.groupBounds(), this.axisY()),
  );
  protected readonly labels = computed(() => shownLabels(this.geometry().cuts, this.cut()));
  protected readonly numeric = computed(() => this.fine().kind === 'numeric');
  protected readonly holdOutPath = partitionPath('holdOut', 5);
  protected readonly outOfTimePath = partitionPath('outOfTime', 4.6);

  /** Notches between groups. */
  protected readonly groupBounds = computed(() => {
    const { columns } = this.geometry();
    const groups = columns.filter(({ bin }) => bin !== null && this.reading().bins[bin].kind === 'group');
    return groups.slice(1).map(({ x0 }) => ({ x: x0 }));
  });

  /** Number of each group, which is the key that sends categories there. */
  protected readonly numbers = computed(() =>
    this.numeric()
      ? []
      : this.geometry().columns.flatMap(({ bin, x0, x1 }) =>
          bin !== null && this.reading().bins[bin].kind === 'group' ? [{ number: bin + 1, x: (x0 + x1) / 2 }] : [],
        ),
  );

  /** Categories in the order they are drawn. */
  protected readonly categories = computed(() => {
    const fine = this.fine();
    const drawn = new Map(this.geometry().classes.map((one) => [one.slot, one]));
    const step = Math.max(1, (this.geometry().axis[1] - this.geometry().axis[0]) / Math.max(1, fine.categories.length));
    const short = shortened(fine.categories, Math.max(3, Math.floor(step / 7)));
    return categoryOrder(fine, this.bins()).map((slot) => {
      const name = fine.categories[slot];
      return { name, slot, x: drawn.get(slot)?.x ?? 0, width: step, short: short.get(name) ?? name };
    });
  });

  protected readonly ladder = computed(() => ladderOf(this.geometry().columns, this.reading(), this.scale()));
  /** The same numbers for those who read. */
  protected readonly table = computed(() => figuresTable(this.fine(), this.reading()));

  /** Where a new group is made, in what is in sight of the drawing. */
  protected readonly apart = computed(() => ({
    x: (this.carried()?.hidden ?? 0) + 1,
    y: this.axisY() + 8,
    width: sizes.left - 12,
    height: 26,
  }));

  constructor() {
    inject(DestroyRef).onDestroy(() => this.scroll.stop());
  }

  protected cutLabel({ cut }: DrawnCut): string {
    return `Cut ${cut + 1} of ${this.geometry().cuts.length}`;
  }

  protected cutWords({ cut, edge }: DrawnCut): string {
    const { bins, informationValue } = this.reading();
    const rate = (bin: number): string => share(bins[bin]?.figures.development?.badRate);
    return `${written(edge)}; bad rate ${rate(cut)} below, ${rate(cut + 1)} from there on; IV ${woe(informationValue)}`;
  }

  protected reach(cut: number): { min: number; max: number } {
    return reachOf(this.fine(), this.bins() as NumericBins, cut);
  }

  protected keyOnCut(event: KeyboardEvent, cut: number): void {
    const bins = this.bins();
    if (!this.editable() || bins.kind !== 'numeric' || event.ctrlKey || event.metaKey || event.altKey) return;
    switch (event.key) {
      case 'Delete':
      case 'Backspace':
        this.editCuts((fine, now) => mergeNumeric(fine, now, cut));
        this.focusBeside(cut);
        event.preventDefault();
        return;
      case 'Enter':
        this.cut.set(cut);
        this.typing.emit();
        event.preventDefault();
        return;
      case 'r':
        this.rounding.emit(cut);
        event.preventDefault();
        event.stopPropagation();
        return;
      case 'Escape':
        this.letGo();
        return;
    }
    const moves = cutMoves[event.key];
    if (!moves) return;
    event.preventDefault();
    this.editCuts((fine, now) => {
      const edge = moves(fine, now, cut);
      return edge === null ? null : moveCut(fine, now, cut, edge);
    });
  }

  /** A cut that is gone leaves the focus to the one that stands in its place, or before it; the last one leaves it to the figure. */
  private focusBeside(cut: number): void {
    afterNextRender(
      () => {
        const svg = this.svg()?.nativeElement;
        const notches = svg?.querySelectorAll<SVGElement>('.notch') ?? [];
        (notches[Math.min(cut, notches.length - 1)] ?? svg)?.focus();
      },
      { injector: this.injector },
    );
  }

  protected grab(event: PointerEvent, cut: number): void {
    const bins = this.bins();
    this.cut.set(cut);
    if (!this.editable() || bins.kind !== 'numeric' || event.button !== 0) return;
    (event.currentTarget as Element).setPointerCapture(event.pointerId);
    this.dragged.set({ pointer: event.pointerId, cut, fromX: event.clientX, moved: false, bins });
  }

  protected drag(event: PointerEvent): void {
    const dragged = this.dragged();
    if (!dragged || dragged.pointer !== event.pointerId) return;
    if (!dragged.moved) {
      if (Math.abs(event.clientX - dragged.fromX) < dragFrom) return;
      this.dragged.set({ ...dragged, moved: true });
    }
    const edge = this.nearest(dragged, event);
    const moved = edge === null ? null : moveCut(this.fine(), dragged.bins, dragged.cut, edge);
    this.previewed.emit(moved?.bins ?? dragged.bins);
  }

  protected drop(event: PointerEvent): void {
    const dragged = this.dragged();
    if (!dragged || dragged.pointer !== event.pointerId) return;
    this.dragged.set(null);
    if (!dragged.moved) return;
    const edge = this.nearest(dragged, event);
    this.previewed.emit(null);
    if (edge !== null) this.editCuts((fine, now) => moveCut(fine, now, dragged.cut, edge));
  }

  /** Ends a drag where it began. */
  protected letGo(): void {
    this.dragged.set(null);
    this.letGoOfCategories();
    this.previewed.emit(null);
  }

  protected keyOnCategory(event: KeyboardEvent, name: string): void {
    const names = this.categories().map((category) => category.name);
    const at = names.indexOf(name);
    const go = (to: number): void => {
      const next = names[Math.min(names.length - 1, Math.max(0, to))];
      this.focusedCategory.set(next);
      const element = [...(this.svg()?.nativeElement.querySelectorAll<SVGElement>('[data-category]') ?? [])].find(
        (one) => one.dataset['category'] === next,
      );
      element?.focus();
      event.preventDefault();
    };
    if (event.key === 'ArrowRight') go(at + 1);
    else if (event.key === 'ArrowLeft') go(at - 1);
    else if (event.key === 'Home') go(0);
    else if (event.key === 'End') go(names.length - 1);
    else if (event.key === ' ' || event.key === 'Enter') {
      this.choose(name);
      event.preventDefault();
    } else if (event.key === 'Escape') {
      // First what is being dragged, then what is chosen; else it is not for the figure.
      if (this.carried()) this.letGo();
      else if (this.chosen().size > 0) this.chosen.set(new Set());
      else return;
      event.preventDefault();
    } else if (event.key === 'n') this.group('new', name);
    else if (/^[1-9]$/.test(event.key)) this.group(Number(event.key) - 1, name);
    else return;
    event.stopPropagation();
  }

  protected tabOf(name: string, first: boolean): number {
    const focused = this.focusedCategory();
    const known = focused !== null && this.fine().categories.includes(focused);
    return (known ? focused === name : first) ? 0 : -1;
  }

  protected choose(name: string): void {
    const chosen = new Set(this.chosen());
    if (!chosen.delete(name)) chosen.add(name);
    this.chosen.set(chosen);
    this.focusedCategory.set(name);
  }

  protected lift(event: PointerEvent, name: string): void {
    if (!this.editable() || event.button !== 0) return;
    (event.currentTarget as Element).setPointerCapture(event.pointerId);
    const categories = this.chosen().has(name) ? [...this.chosen()] : [name];
    const { clientX, clientY } = event;
    this.carried.set({
      pointer: event.pointerId,
      categories,
      fromX: clientX,
      at: { clientX, clientY },
      moved: false,
      hidden: 0,
      over: null,
    });
  }

  protected carry(event: PointerEvent): void {
    const carried = this.carried();
    if (!carried || carried.pointer !== event.pointerId) return;
    if (!carried.moved && Math.abs(event.clientX - carried.fromX) < dragFrom) return;
    this.carryTo(carried, { clientX: event.clientX, clientY: event.clientY });
    const frame = this.frame();
    if (frame) this.scroll.follow(frame, event.clientX);
  }

  private carryTo(carried: DraggedCategory, at: Pointer): void {
    this.carried.set({ ...carried, at, moved: true, hidden: this.hidden(), over: this.overAt(at) });
  }

  private letGoOfCategories(): void {
    this.scroll.stop();
    this.carried.set(null);
  }

  protected put(event: PointerEvent, name: string): void {
    const carried = this.carried();
    if (!carried || carried.pointer !== event.pointerId) return;
    // Where it is let go is asked of what is in sight now: the figure may have scrolled since the pointer moved.
    const over = this.overAt(event);
    this.letGoOfCategories();
    if (!carried.moved) {
      this.choose(name);
      return;
    }
    if (over !== null) this.regroup(carried.categories, over);
  }

  private group(target: number | 'new', name: string): void {
    if (this.editable()) this.regroup(this.chosen().size > 0 ? [...this.chosen()] : [name], target);
  }

  /** @param target as it is numbered in what is drawn */
  private regroup(categories: readonly string[], target: number | 'new'): void {
    const drawn = this.bins();
    if (drawn.kind !== 'categorical') return;
    const member = target === 'new' ? null : drawn.groups[target]?.[0];
    if (member === undefined) return;
    const make: MakeEdit = (fine, now) => {
      if (now.kind !== 'categorical') return null;
      const place = member === null ? 'new' : now.groups.findIndex((group) => group.includes(member));
      return groupCategories(fine, now, categories, place);
    };
    const done = make(this.fine(), drawn) !== null;
    this.edited.emit(make);
    if (done) this.chosen.set(new Set());
  }

  private editCuts(make: (fine: FineClasses, bins: NumericBins) => EditOf<NumericBins> | null): void {
    this.edited.emit((fine, bins) => (bins.kind === 'numeric' ? make(fine, bins) : null));
  }

  private nearest({ cut, bins, fromX }: Dragged, event: PointerEvent): number | null {
    return edgeLetGo(this.geometry().edges, bins, cut, this.inDrawing(event.clientX - fromX), event.altKey);
  }

  /** The group under the pointer, or the place for a new one; null over anything else, and over what is out of sight. */
  private overAt({ clientX, clientY }: Pointer): number | 'new' | null {
    const frame = this.frame();
    const bounds = frame?.getBoundingClientRect();
    if (frame && bounds && (clientX > bounds.right || (clientX < bounds.left && frame.scrollLeft > 0))) return null;
    const drawing = this.svg()?.nativeElement.getBoundingClientRect();
    const [x, y] = [this.inDrawing(clientX - (drawing?.left ?? 0)), this.inDrawing(clientY - (drawing?.top ?? 0))];
    const { y: top, width, height } = this.apart();
    const left = this.hidden();
    // It lies over the categories where the figure is scrolled; above and below it their groups can be reached.
    if (x >= left && x <= left + width + 2 && y >= top - 4 && y <= top + height + 4) return 'new';
    const column = this.geometry().columns.find(({ x0, x1 }) => x >= x0 && x < x1);
    if (!column) return 'new';
    return column.bin !== null && this.reading().bins[column.bin].kind === 'group' ? column.bin : null;
  }

  /** What a figure scrolls in that is wider than the page; null where all of it is in sight. */
  private frame(): HTMLElement | null {
    const svg = this.svg()?.nativeElement;
    return svg ? frameOf(svg) : null;
  }

  /** Pixels of the drawing that are out of sight at the left. */
  private hidden(): number {
    const [frame, svg] = [this.frame(), this.svg()?.nativeElement];
    if (!frame || !svg) return 0;
    return Math.max(0, this.inDrawing(frame.getBoundingClientRect().left - svg.getBoundingClientRect().left));
  }

  /** A length on the screen in the drawing's own pixels. */
  private inDrawing(length: number): number {
    const shown = this.svg()?.nativeElement.getBoundingClientRect().width ?? 0;
    return shown > 0 ? (length * this.geometry().width) / shown : 0;
  }
}
