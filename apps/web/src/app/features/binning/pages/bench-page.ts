import {
  ChangeDetectionStrategy,
  Component,
  type ElementRef,
  Injector,
  computed,
  effect,
  inject,
  input,
  signal,
  viewChild,
} from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { MatButtonToggleModule } from '@angular/material/button-toggle';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatIconModule } from '@angular/material/icon';
import { MatInputModule } from '@angular/material/input';
import { MatSelectModule } from '@angular/material/select';
import { Router, RouterLink } from '@angular/router';
import {
  groupCategories,
  mergeGroups,
  mergeNumeric,
  readBench,
  readingInterval,
  rounderCut,
  splitGroup,
  splitNumeric,
  binLabels,
  type PartitionName,
} from '@tallystone/numeric/bench';
import { firstValueFrom } from 'rxjs';
import { CurrentModel } from '../../../core/current-model';
import { columnLabels } from '../../../core/column-labels';
import { Problem } from '../../../core/http/problem';
import { Shortcuts } from '../../../core/shortcuts';
import { Task } from '../../../core/task';
import { warnBeforeUnload } from '../../../core/unsaved-changes';
import { DecisionNotice } from '../../../ui/decision-notice';
import { binWords, count, metric, moment, plural, valueWords, woe, written } from '../../../ui/numbers';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { Tombstone } from '../../../ui/tombstone';
import { type MakeEdit, currentBins } from '../bench/history';
import { Bench } from '../data/bench';
import { Binnings, binningOf, characteristicsOf } from '../data/binnings';
import { benchFinding, smoothingWords, trendWords, warningsOf } from '../ui/bench-finding';
import { BenchMonths } from './bench-months';
import { BinsFigure } from '../ui/bins-figure';
import { EditList, type KnownEdit } from '../ui/edit-list';
import { editWords, notCarriedWords } from '../ui/edit-words';
import { type AxisMode, layOut } from '../ui/geometry';
import { type Measure, type Span, asMeasure, asSpan } from '../ui/months-view';
import { OutOfTimeCover } from '../ui/out-of-time-cover';
import { PartitionFigures } from '../ui/partition-figures';
import { Places } from '../ui/places';
import { PooledNote } from '../ui/pooled-note';
import type { ReclassAnswer, ReclassQuestion } from '../ui/reclass-dialog';
import type { StaleAnswer, StaleQuestion } from '../ui/stale-dialog';

/** Chosen categories that are named. */
const mostNamed = 12;

/** Why a cut cannot be where it was put, in one sentence. */
class NotPlaced extends Error {}

/** The bench of one characteristic. */
@Component({
  selector: 'ts-bench-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [
    RouterLink,
    MatButtonModule,
    MatButtonToggleModule,
    MatFormFieldModule,
    MatIconModule,
    MatInputModule,
    MatSelectModule,
    BenchMonths,
    BinsFigure,
    DecisionNotice,
    EditList,
    OutOfTimeCover,
    PageHeader,
    PartitionFigures,
    Places,
    PooledNote,
    ProblemList,
    Tombstone,
  ],
  providers: [Bench],
  host: { class: 'ts-page' },
  templateUrl: './bench-page.html',
  styleUrl: './bench-page.scss',
})
export class BenchPage {
  protected readonly bench = inject(Bench);
  private readonly binnings = inject(Binnings);
  private readonly injector = inject(Injector);
  private readonly current = inject(CurrentModel);
  private readonly router = inject(Router);

  readonly modelId = input.required<string>();
  readonly binningId = input.required<string>();
  readonly characteristicId = input.required<string>();
  // What is looked at, which stands in the address: a link, a reload and the way back show it again.
  readonly axis = input<string>();
  readonly partition = input<string>();
  readonly measure = input<string>();
  readonly period = input<string>();

  readonly unsaved = this.bench.unsaved;

  private readonly valueField = viewChild<ElementRef<HTMLInputElement>>('value');
  protected readonly binning = binningOf(() => this.binningId());
  private readonly labels = columnLabels(() => (this.binning.hasValue() ? this.binning.value().definitionId : null));
  /** What the dictionary calls it, beside its heading. */
  protected readonly label = computed(() => this.labels().get(this.column()) ?? null);
  private readonly list = characteristicsOf(() => this.binningId());
  protected readonly cut = signal<number | null>(null);
  protected readonly bin = signal<number | null>(null);
  protected readonly chosen = signal<ReadonlySet<string>>(new Set());
  protected readonly writing = signal<string | null>(null);
  protected readonly placing = new Task();
  protected readonly changing = new Task();
  /** Why a cut cannot be where it was put, which is said beside the field; null where something else went wrong. */
  protected readonly placeWords = computed(() => {
    const error = this.placing.error();
    if (error instanceof NotPlaced) return error.message;
    const said = error instanceof Problem ? error.forField('edge') : undefined;
    return said ? valueWords(said.message) : null;
  });
  private readonly asked = signal(false);

  protected readonly column = computed(() => this.bench.detail()?.column ?? 'Bins');
  protected readonly editWords = editWords;
  protected readonly notCarriedWords = notCarriedWords;
  protected readonly warnings = computed(() => {
    const [reading, detail] = [this.bench.reading(), this.bench.detail()];
    return reading && detail ? warningsOf(reading, detail.constraints, this.bench.drift()) : [];
  });
  protected readonly finding = computed(() => {
    const fine = this.bench.fine();
    const reading = this.bench.reading();
    return fine && reading ? benchFinding(fine, reading, this.warnings()) : null;
  });
  /** Spread of IV over resamples; recalculated only when bins are settled, not while a cut is on its way. */
  private readonly spread = computed(() => {
    const fine = this.bench.fine();
    const history = this.bench.history();
    if (!fine || !history) return null;
    return readingInterval(readBench(fine, currentBins(history)));
  });
  protected readonly note = computed(() => {
    const fine = this.bench.fine();
    const reading = this.bench.reading();
    if (!fine || !reading) return null;
    const spread = this.spread();
    return `${trendWords(fine, reading)}, IV ${woe(reading.informationValue)}${spread === null ? '' : ` (${woe(spread.lower)} to ${woe(spread.upper)})`}, Gini ${metric(reading.gini)}`;
  });
  protected readonly savedWords = computed(() => {
    const at = this.bench.savedAt();
    switch (this.bench.state()) {
      case 'waiting':
        return 'Not saved yet';
      case 'saving':
        return 'Saving';
      case 'failed':
        return 'Not saved; trying again';
      case 'refused':
        return 'Not saved; your edits are kept here';
      case 'stale':
        return 'Not saved: somebody else saved first';
      default:
        return at ? `Saved ${moment(at)}` : '';
    }
  });
  /** What can be done about a save that was refused, which is not tried again by itself. */
  protected readonly refusedWords = computed(() =>
    this.bench.state() === 'refused'
      ? 'It was not saved and is not tried again by itself. No edit is lost: undo or change what was refused, or save again once it is put right.'
      : null,
  );
  protected readonly editsWords = computed(() => {
    const count = this.bench.unexplained();
    return `${plural(count, 'edit')} ${count === 1 ? 'has' : 'have'} no reason yet`;
  });
  protected readonly known = computed<ReadonlyMap<string, KnownEdit>>(
    () =>
      new Map(
        (this.bench.detail()?.editList ?? []).map(({ id, by, at, carriedFrom }) => [
          id,
          { by, at, from: carriedFrom ? `${carriedFrom.binning}, ${carriedFrom.by}` : null },
        ]),
      ),
  );
  protected readonly notCarried = computed(() => {
    const list = this.bench.detail()?.notCarriedList ?? [];
    return list.length > 0 ? list : null;
  });
  protected readonly mode = computed<AxisMode>(() => {
    const asked = this.axis();
    if (asked === 'value' || asked === 'rows') return asked;
    return this.usualMode();
  });
  /** Partition of the table under the figure; out-of-time only once it has been opened. */
  protected readonly shownPartition = computed<PartitionName>(() => {
    const asked = this.partition();
    return asked === 'holdOut' || (asked === 'outOfTime' && this.bench.fine()?.outOfTime) ? asked : 'development';
  });
  /** Of WOE in the table under the figure. */
  protected readonly smoothing = computed(() => {
    const reading = this.bench.reading();
    return reading && smoothingWords(reading, this.shownPartition());
  });
  protected readonly shownMeasure = computed<Measure>(() => asMeasure(this.measure()) ?? 'woe');
  protected readonly askedSpan = computed<Span | null>(() => asSpan(this.period()));
  /** Along the values where every bin has room for its figures there; else by rows. Decided once per characteristic, not with every move. */
  private readonly usualMode = computed<AxisMode>(() => {
    const detail = this.bench.detail();
    if (!detail) return 'value';
    const reading = readBench(detail.fine, detail.automatic);
    const { columns } = layOut(detail.fine, detail.automatic, reading, 1100, 'value');
    return columns.every(({ x0, x1 }) => x1 - x0 > 44) ? 'value' : 'rows';
  });
  protected readonly coarse = computed(() => {
    const reading = this.bench.reading();
    return reading ? reading.bins.filter(({ kind }) => kind === 'cut' || kind === 'group') : [];
  });
  protected readonly selectedLabel = computed(() => {
    const bin = this.bin();
    const label = bin === null ? null : this.coarse()[bin]?.label;
    return label == null ? null : binWords(label);
  });
  protected readonly cutValue = computed(() => {
    const bins = this.bench.bins();
    const cut = this.cut();
    return bins?.kind === 'numeric' && cut !== null ? (bins.edges[cut] ?? null) : null;
  });
  /** The round number the selected cut can go to. */
  protected readonly rounder = computed(() => {
    const [fine, bins, cut] = [this.bench.fine(), this.bench.bins(), this.cut()];
    return fine && bins?.kind === 'numeric' && cut !== null ? rounderCut(fine, bins, cut) : null;
  });
  protected readonly rounderWords = computed(() => {
    const value = this.rounder();
    return value === null ? 'Round already' : `Round to ${written(value)}`;
  });
  /** How many categories are chosen, and which: their labels in the figure may be shortened. */
  protected readonly chosenWords = computed(() => {
    const names = [...this.chosen()];
    const more = names.length - mostNamed;
    const listed = names.slice(0, mostNamed).join(', ') + (more > 0 ? ` and ${count(more)} more` : '');
    return `${plural(names.length, 'category', 'categories')} chosen: ${listed}`;
  });
  protected readonly neighbours = computed(() => {
    const list = this.list.hasValue() ? this.list.value().characteristics : [];
    const at = list.findIndex(({ id }) => id === this.characteristicId());
    return { previous: list[at - 1] ?? null, next: at >= 0 ? (list[at + 1] ?? null) : null };
  });

  constructor() {
    warnBeforeUnload(() => this.unsaved());
    effect(() => {
      const [binningId, characteristicId] = [this.binningId(), this.characteristicId()];
      this.cut.set(null);
      this.bin.set(null);
      this.chosen.set(new Set());
      void this.bench.load(binningId, characteristicId);
    });
    effect(() => {
      if (this.bench.state() !== 'stale') this.asked.set(false);
      else if (!this.asked()) {
        this.asked.set(true);
        void this.settle();
      }
    });
    // The work's rule counts edits without a reason.
    let before: number | null = null;
    effect(() => {
      if (this.bench.state() !== 'saved') return;
      const now = this.bench.detail()?.editsWithoutReason ?? null;
      if (before !== null && now !== null && now !== before) void this.current.reload();
      before = now;
    });
    inject(Shortcuts).add(
      { keys: 'Mod+z', does: 'Undo', where: 'Binning', run: () => this.bench.undo() },
      { keys: 'Mod+Shift+z', does: 'Redo', where: 'Binning', run: () => this.bench.redo() },
      { keys: 'Mod+y', does: 'Redo', where: 'Binning', run: () => this.bench.redo() },
      { keys: 'a', does: 'Add a cut at a value', where: 'Binning', run: () => this.toValue(null) },
      { keys: 'm', does: 'Merge the selected bin with the next', where: 'Binning', run: () => this.merge(0) },
      { keys: 's', does: 'Split the selected bin at its best cut', where: 'Binning', run: () => this.split() },
      { keys: 'r', does: 'Move the selected cut to a round number', where: 'Binning', run: () => this.round() },
      { keys: ']', does: 'Next characteristic', where: 'Binning', run: () => this.goTo(this.neighbours().next?.id) },
      { keys: '[', does: 'Previous characteristic', where: 'Binning', run: () => this.goTo(this.neighbours().previous?.id) },
    );
  }

  flush(): Promise<void> {
    return this.bench.flush();
  }

  protected edit(make: MakeEdit): void {
    if (!this.bench.edit(make)) return;
    this.placing.clear();
    const count = this.coarse().length;
    if ((this.bin() ?? 0) >= count) this.bin.set(null);
    if ((this.cut() ?? 0) >= count - 1) this.cut.set(null);
  }

  /** Merges the selected bin with the one after it (0) or before it (-1). */
  protected merge(side: 0 | -1): void {
    const bin = this.bin();
    if (bin === null) return;
    this.edit((fine, bins) =>
      bins.kind === 'numeric' ? mergeNumeric(fine, bins, bin + side) : mergeGroups(fine, bins, bin, bin + 1 + 2 * side),
    );
  }

  protected split(): void {
    const bin = this.bin();
    if (bin === null) return;
    const wish = this.bench.detail()?.constraints ?? null;
    this.edit((fine, bins) =>
      bins.kind === 'numeric' ? splitNumeric(fine, bins, bin, wish) : splitGroup(fine, bins, bin, wish),
    );
  }

  protected group(target: number | 'new'): void {
    const chosen = [...this.chosen()];
    this.edit((fine, bins) => (bins.kind === 'categorical' ? groupCategories(fine, bins, chosen, target) : null));
    this.chosen.set(new Set());
  }

  protected onBinKey({ bin, event }: { bin: number; event: KeyboardEvent }): void {
    if (event.key !== 'm' && event.key !== 's') return;
    event.stopPropagation();
    this.bin.set(bin);
    if (event.key === 'm') this.merge(0);
    else this.split();
  }

  /** To the field in which a value is typed: for the selected cut, or for a new one. */
  protected toValue(cut: number | null): void {
    this.cut.set(cut);
    const field = this.valueField()?.nativeElement;
    field?.focus();
    field?.select();
  }

  /** A value was typed: the selected cut goes there, or a new cut comes. */
  protected place(event: Event): void {
    event.preventDefault();
    const field = this.valueField()?.nativeElement;
    const value = field ? field.valueAsNumber : Number.NaN;
    if (!Number.isFinite(value)) return;
    this.placeCut(this.cut(), value, () => {
      if (field) field.value = '';
    });
  }

  /** A cut goes to exactly this value, or a new cut comes there; the fine class is split where it has to be. */
  protected placeCut(cut: number | null, value: number, added?: () => void): void {
    void this.placing.run(async () => {
      const done = cut === null ? await this.bench.addCutAt(value) : await this.bench.moveCutTo(cut, value);
      if (!done)
        throw new NotPlaced(
          cut === null
            ? `There is a cut at ${written(value)} already.`
            : 'A cut stays between its neighbours, and this one is there already or would pass them.',
        );
      if (cut === null) added?.();
    });
  }

  protected round(cut = this.cut()): void {
    this.cut.set(cut);
    const value = this.rounder();
    if (value !== null) this.placeCut(cut, value);
  }

  protected removeCut(): void {
    const cut = this.cut();
    if (cut !== null) this.edit((fine, bins) => (bins.kind === 'numeric' ? mergeNumeric(fine, bins, cut) : null));
  }

  protected show(queryParams: Partial<Record<'axis' | 'partition' | 'measure' | 'period', string | null>>): void {
    void this.router.navigate([], { queryParams, queryParamsHandling: 'merge', replaceUrl: true });
  }

  protected async reclass(): Promise<void> {
    await this.bench.flush();
    const detail = this.bench.detail();
    if (!detail || this.bench.unsaved()) return;
    const [{ MatDialog }, { ReclassDialog }] = await Promise.all([
      import('@angular/material/dialog'),
      import('../ui/reclass-dialog'),
    ]);
    const data: ReclassQuestion = { columns: [detail.column], constraints: detail.constraints, edits: detail.edits };
    const reference = this.injector
      .get(MatDialog)
      .open<InstanceType<typeof ReclassDialog>, ReclassQuestion, ReclassAnswer>(ReclassDialog, { data, width: '600px' });
    const answer = await firstValueFrom(reference.afterClosed());
    if (!answer) return;
    const { fineClasses: _fineClasses, ...constraints } = answer.constraints;
    await this.changing.run(async () => {
      await this.binnings.reclass(this.binningId(), {
        characteristics: [{ id: detail.id, revision: detail.revision }],
        constraints,
        reason: answer.reason,
      });
      await this.bench.readAnew();
      await this.current.reload();
    });
  }

  protected async openOutOfTime(reason: string): Promise<void> {
    if (!this.binning.hasValue()) return;
    const { definitionId } = this.binning.value();
    await this.changing.run(async () => {
      await this.bench.flush();
      await this.binnings.openOutOfTime(definitionId, reason);
      this.binning.reload();
      await this.bench.load(this.binningId(), this.characteristicId());
    });
  }

  /** Theirs or mine, side by side. */
  protected async settle(): Promise<void> {
    const theirs = this.bench.theirs();
    const history = this.bench.history();
    if (!theirs || !history) return;
    const [{ MatDialog }, { StaleDialog }] = await Promise.all([
      import('@angular/material/dialog'),
      import('../ui/stale-dialog'),
    ]);
    const mine = currentBins(history);
    const data: StaleQuestion = {
      column: theirs.column,
      by: theirs.changedBy,
      at: theirs.changedAt,
      theirs: {
        informationValue: theirs.informationValue,
        bins: binLabels(theirs.fine, theirs.current),
        edits: theirs.editList,
      },
      mine: {
        informationValue: readBench(theirs.fine, mine).informationValue,
        bins: binLabels(theirs.fine, mine),
        edits: history.edits,
      },
    };
    const reference = this.injector
      .get(MatDialog)
      .open<InstanceType<typeof StaleDialog>, StaleQuestion, StaleAnswer>(StaleDialog, { data, width: '640px' });
    const answer = await firstValueFrom(reference.afterClosed());
    if (answer === 'theirs') this.bench.takeTheirs();
    else if (answer === 'mine') this.bench.keepMine();
  }

  private goTo(id: string | undefined): void {
    if (id)
      void this.router.navigate(['/models', this.modelId(), 'binning', this.binningId(), id], {
        queryParamsHandling: 'preserve',
      });
  }
}
