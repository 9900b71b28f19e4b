import { Injectable, computed, inject, signal } from '@angular/core';
import type { EditReason } from '@tallystone/contracts/binnings/edits';
import {
  addCut,
  type MonthlyDrift,
  moveCut,
  readBench,
  type BenchReading,
  type Bins,
  type EditOf,
  type FineClasses,
  type NumericBins,
} from '@tallystone/numeric/bench';
import { type Tagged, isStale } from '../../../core/http/etag';
import { type Problem, asProblem } from '../../../core/http/problem';
import {
  act,
  begin,
  currentBins,
  explain,
  keepMine,
  reachable,
  redo,
  reset,
  settled,
  takeTheirs,
  toSave,
  undo,
  unexplained,
  type History,
  type MakeEdit,
} from '../bench/history';
import { Binnings, type CharacteristicDetail } from './binnings';

/** Time without a further edit after which the bench is saved. */
const saveAfter = 1200; // ms
/** However quickly edits follow one another: the first that is not saved waits no longer than this. */
const saveWithin = 2000; // ms
const retryAfter = 5000; // ms

/**
 * waiting: an edit is not sent yet; stale: somebody else saved first and a person must say which bins stay; failed: it is tried again by itself; refused:
 * the same would be refused again, so that it waits for a person.
 */
export type SaveState = 'saved' | 'waiting' | 'saving' | 'stale' | 'failed' | 'refused';

/** Whether the same may go well later: the server was not reached, could not answer or asks to wait. What it read and refused it will refuse again. */
const mayPass = ({ status }: Problem): boolean => status < 400 || status >= 500 || status === 408 || status === 429;

/**
 * The bench of one characteristic: its bins under edit, everything recalculated at once from the fine-class counts by the server's own code,
 * undo and redo, and saving by itself. Provided by the page that shows it.
 */
@Injectable()
export class Bench {
  private readonly binnings = inject(Binnings);
  private address: { binningId: string; characteristicId: string } | null = null;
  private etag = '';
  private timer: ReturnType<typeof setTimeout> | undefined;
  /** When the first edit was made that has not been sent; null where all have. */
  private waitingSince: number | null = null;
  private saving: Promise<void> | null = null;

  private readonly detailOf = signal<CharacteristicDetail | null>(null);
  private readonly historyOf = signal<History | null>(null);
  private readonly previewOf = signal<Bins | null>(null);
  private readonly theirsOf = signal<Tagged<CharacteristicDetail> | null>(null);
  private readonly stateOf = signal<SaveState>('saved');
  private readonly problemOf = signal<unknown>(null);
  private readonly savedAtOf = signal<string | null>(null);
  private readonly driftOf = signal<MonthlyDrift | null>(null);

  readonly detail = this.detailOf.asReadonly();
  readonly history = this.historyOf.asReadonly();
  /** How far WOE moves between months; null before that is known. */
  readonly drift = this.driftOf.asReadonly();
  readonly state = this.stateOf.asReadonly();
  readonly problem = this.problemOf.asReadonly();
  readonly savedAt = this.savedAtOf.asReadonly();
  /** What somebody else saved while this bench had edits of its own. */
  readonly theirs = computed(() => this.theirsOf()?.value ?? null);
  readonly editable = computed(() => this.detailOf()?.abilities.includes('edit') ?? false);
  readonly unsaved = computed(() => this.stateOf() !== 'saved');
  readonly unexplained = computed(() => {
    const history = this.historyOf();
    return history ? unexplained(history) : 0;
  });

  readonly fine = computed<FineClasses | null>(() => this.detailOf()?.fine ?? null);
  /** The bins as they are, or as they would be where a cut is being dragged to. */
  readonly bins = computed<Bins | null>(() => {
    const history = this.historyOf();
    return this.previewOf() ?? (history ? currentBins(history) : null);
  });
  readonly reading = computed<BenchReading | null>(() => {
    const fine = this.fine();
    const bins = this.bins();
    return fine && bins ? readBench(fine, bins) : null;
  });

  async load(binningId: string, characteristicId: string): Promise<void> {
    await this.flush();
    clearTimeout(this.timer);
    this.waitingSince = null;
    this.address = { binningId, characteristicId };
    this.stateOf.set('saved');
    this.previewOf.set(null);
    this.detailOf.set(null);
    this.historyOf.set(null);
    this.theirsOf.set(null);
    this.problemOf.set(null);
    this.driftOf.set(null);
    try {
      const tagged = await this.binnings.readCharacteristic(binningId, characteristicId);
      if (this.address?.characteristicId === characteristicId) this.take(tagged);
    } catch (error) {
      this.problemOf.set(error);
    }
  }

  /** How far WOE moves between months, told when their counts have come: they come by themselves. */
  moves(drift: MonthlyDrift | null): void {
    this.driftOf.set(drift);
  }

  /** Shows where a drag would lead; nothing is an edit before it is let go. */
  preview(bins: Bins | null): void {
    this.previewOf.set(bins);
  }

  do(edit: EditOf<Bins> | null): boolean {
    this.previewOf.set(null);
    const history = this.historyOf();
    if (!edit || !history || !this.editable()) return false;
    const next = act(history, edit, crypto.randomUUID(), performance.now());
    if (next === history) return false;
    this.change(next);
    return true;
  }

  /** Edits the bins as they are now. */
  edit(make: MakeEdit): boolean {
    const [fine, history] = [this.fine(), this.historyOf()];
    return this.do(fine && history && make(fine, currentBins(history)));
  }

  undo(): void {
    this.stepTo(undo);
  }

  redo(): void {
    this.stepTo(redo);
  }

  reset(): void {
    this.stepTo(reset);
  }

  explain(id: string, reason: EditReason | null): void {
    this.stepTo((history) => explain(history, id, reason));
  }

  /** Adds a cut at exactly this value; a fine class is split from the stored column where the value lies inside one. Rejects with a Problem. */
  async addCutAt(value: number): Promise<boolean> {
    await this.refine(value);
    return this.onNumeric((fine, bins) => addCut(fine, bins, value));
  }

  /** Moves a cut to exactly this value. Rejects with a Problem. */
  async moveCutTo(cut: number, value: number): Promise<boolean> {
    await this.refine(value);
    return this.onNumeric((fine, bins) => moveCut(fine, bins, cut, value));
  }

  /** Saves now what has not been saved. */
  async flush(): Promise<void> {
    clearTimeout(this.timer);
    await this.saving;
    if (['waiting', 'failed', 'refused'].includes(this.stateOf())) await this.save();
  }

  /** Their bins; undo brings own edits back, over theirs. */
  takeTheirs(): void {
    const theirs = this.theirsOf();
    const mine = this.historyOf();
    if (!theirs || !mine) return;
    this.take(theirs);
    const taken = takeTheirs(theirs.value, mine);
    this.historyOf.set(reachable(taken, this.mineOver(theirs.value, mine)));
    // Reasons that were given here meanwhile.
    if (unexplained(taken) < theirs.value.editsWithoutReason) this.wait();
  }

  /** Own bins, saved over theirs as further edits. */
  keepMine(): void {
    const theirs = this.theirsOf();
    const mine = this.historyOf();
    if (!theirs || !mine) return;
    this.theirsOf.set(null);
    this.etag = theirs.etag;
    this.detailOf.set(theirs.value);
    this.change(this.mineOver(theirs.value, mine));
  }

  /** Reads the characteristic that was classed anew; undo brings the edits back that this ended. */
  async readAnew(): Promise<void> {
    const [address, before] = [this.address, this.historyOf()];
    if (!address) return;
    await this.load(address.binningId, address.characteristicId);
    const [detail, fresh] = [this.detailOf(), this.historyOf()];
    if (!detail || !fresh || !before || before.edits.length === 0) return;
    this.historyOf.set(
      reachable(
        fresh,
        keepMine(detail, before, 'those classed anew', () => crypto.randomUUID()),
      ),
    );
  }

  private mineOver(theirs: CharacteristicDetail, mine: History): History {
    return keepMine(theirs, mine, `those of ${theirs.changedBy}`, () => crypto.randomUUID());
  }

  private stepTo(step: (history: History) => History): void {
    const history = this.historyOf();
    if (!history || !this.editable()) return;
    const next = step(history);
    if (next !== history) this.change(next);
  }

  private change(history: History): void {
    this.historyOf.set(history);
    if (this.stateOf() === 'stale' && this.theirsOf()) return;
    this.wait();
  }

  private wait(): void {
    this.stateOf.set('waiting');
    this.waitingSince ??= performance.now();
    this.schedule();
  }

  private schedule(): void {
    clearTimeout(this.timer);
    const left = saveWithin - (performance.now() - (this.waitingSince ?? performance.now()));
    this.timer = setTimeout(() => void this.save(), Math.max(0, Math.min(saveAfter, left)));
  }

  private save(): Promise<void> {
    this.saving ??= this.send().finally(() => (this.saving = null));
    return this.saving;
  }

  private async send(): Promise<void> {
    const history = this.historyOf();
    const { address } = this;
    if (!history || !address) return;
    // An edit that is further along than the one that was sent would be another one, and the record would say that the first was taken back.
    const sent = settled(history);
    this.historyOf.set(sent);
    clearTimeout(this.timer);
    this.waitingSince = null;
    this.stateOf.set('saving');
    try {
      const { value, etag } = await this.binnings.saveCharacteristic(
        address.binningId,
        address.characteristicId,
        toSave(sent),
        this.etag,
      );
      if (this.address !== address) return;
      this.etag = etag;
      this.detailOf.set(value);
      this.savedAtOf.set(value.changedAt);
      this.problemOf.set(null);
      this.stateOf.set('saved');
      // What was edited while the answer was under way.
      if (this.historyOf() !== sent) {
        this.stateOf.set('waiting');
        this.schedule();
      }
    } catch (error) {
      if (this.address !== address) return;
      if (isStale(error)) await this.meet(address, sent);
      else this.fail(error, sent);
    }
  }

  /** Somebody else was faster: looks at what they saved. */
  private async meet(address: { binningId: string; characteristicId: string }, sent: History): Promise<void> {
    try {
      const theirs = await this.binnings.readCharacteristic(address.binningId, address.characteristicId);
      if (this.address !== address) return;
      clearTimeout(this.timer);
      this.theirsOf.set(theirs);
      this.problemOf.set(null);
      this.stateOf.set('stale');
    } catch (error) {
      if (this.address === address) this.fail(error, sent);
    }
  }

  /** Nothing is lost: what could not be saved stays here, and is sent again by itself where that can help. */
  private fail(error: unknown, sent: History): void {
    const problem = asProblem(error);
    clearTimeout(this.timer);
    this.problemOf.set(problem);
    if (mayPass(problem)) {
      this.stateOf.set('failed');
      this.timer = setTimeout(() => void this.save(), Math.max(retryAfter, 1000 * (problem.retryAfterSeconds ?? 0)));
    } else if (this.historyOf() === sent) this.stateOf.set('refused');
    // What was edited meanwhile is another question.
    else this.wait();
  }

  private take({ value, etag }: Tagged<CharacteristicDetail>): void {
    clearTimeout(this.timer);
    this.waitingSince = null;
    this.etag = etag;
    this.theirsOf.set(null);
    this.previewOf.set(null);
    this.problemOf.set(null);
    this.detailOf.set(value);
    this.historyOf.set(begin(value.automatic, value.editList));
    this.savedAtOf.set(value.changedAt);
    this.stateOf.set('saved');
  }

  private async refine(edge: number): Promise<void> {
    const { address } = this;
    if (!address || this.fine()?.edges.includes(edge)) return;
    const finer = await this.binnings.splitFineClass(address.binningId, address.characteristicId, edge);
    const detail = this.detailOf();
    if (detail && this.address === address) this.detailOf.set({ ...detail, fine: finer.fine });
  }

  private onNumeric(make: (fine: FineClasses, bins: NumericBins) => EditOf<NumericBins> | null): boolean {
    return this.edit((fine, bins) => (bins.kind === 'numeric' ? make(fine, bins) : null));
  }
}
