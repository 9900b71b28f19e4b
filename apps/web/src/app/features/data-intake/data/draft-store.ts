import { DestroyRef, Injectable, computed, inject, signal } from '@angular/core';
import { type Problem, asProblem } from '../../../core/http/problem';
import { type Tagged, isStale } from '../../../core/http/etag';
import { sameValue } from '../../../core/same-value';
import { keepBoth } from './draft-merge';
import { type Draft, type DraftCheck, type DraftContent, Samples } from './samples';

export type SaveState = 'saved' | 'unsaved' | 'saving' | 'stale' | 'failed';

/** What gave way when a person said which draft stays; it can be had back while the sample is open. */
export interface SetAside {
  readonly whose: 'theirs' | 'mine';
  readonly content: DraftContent;
}

const saveAfterMs = 700;

/**
 * The draft of a sample's definition under edit, shared by the pages of one sample. Saves by itself a moment after the last change, under
 * the tag that was read; when someone else saved meanwhile it stops, reads what they saved, and asks: theirs, mine or both.
 */
@Injectable()
export class DraftStore {
  private readonly samples = inject(Samples);
  private readonly draft = signal<Draft | null>(null);
  private readonly mine = signal<DraftContent | null>(null);
  private readonly state = signal<SaveState>('saved');
  private readonly failure = signal<Problem | null>(null);
  private readonly result = signal<DraftCheck | null>(null);
  private readonly isChecking = signal(false);
  private readonly readTheirs = signal<Tagged<Draft> | null>(null);
  private readonly gaveWay = signal<SetAside | null>(null);
  private etag = '';
  private place: { modelId: string; sampleId: string } | null = null;
  private timer: ReturnType<typeof setTimeout> | null = null;
  private saving: Promise<void> | null = null;

  readonly content = computed(() => this.mine() ?? this.draft()?.content ?? null);
  readonly revision = computed(() => this.draft()?.revision ?? null);
  readonly savedAt = computed(() => this.draft()?.savedAt ?? null);
  readonly savedBy = computed(() => this.draft()?.savedBy ?? null);
  /** Everything that still stands in the way of confirming, as far as the columns alone can tell. */
  readonly problems = computed(() => this.draft()?.problems ?? []);
  readonly saveState = this.state.asReadonly();
  readonly error = this.failure.asReadonly();
  readonly unsaved = computed(() => this.state() !== 'saved');
  /** What the draft gives on the rows; null until counted, or while it has changed since. */
  readonly check = this.result.asReadonly();
  readonly checking = this.isChecking.asReadonly();
  /** After a stale save: the draft as someone else saved it; null until it is read. */
  readonly theirs = computed(() => this.readTheirs()?.value ?? null);
  /** What both began from. */
  readonly before = computed(() => this.draft()?.content ?? null);
  /** Theirs and mine put together; null where both changed the same. */
  readonly both = computed(() => {
    const [before, theirs, mine] = [this.before(), this.theirs(), this.mine()];
    return before && theirs && mine ? keepBoth(before, theirs.content, mine) : null;
  });
  readonly setAside = this.gaveWay.asReadonly();

  constructor() {
    inject(DestroyRef).onDestroy(() => void this.flush());
  }

  async open(modelId: string, sampleId: string): Promise<void> {
    // The file may have been read again, or somebody else may have saved: only what was changed here is left as it is.
    if (this.place?.sampleId === sampleId && this.draft() && this.state() !== 'saved') return;
    if (this.place?.sampleId !== sampleId) {
      this.draft.set(null);
      this.mine.set(null);
      this.readTheirs.set(null);
      this.gaveWay.set(null);
      this.state.set('saved');
    }
    this.place = { modelId, sampleId };
    await this.read(() => this.state() === 'saved');
  }

  /** Takes what the server has now; own changes that were not saved are given up. */
  reload(): Promise<void> {
    return this.read(() => true);
  }

  /** `wanted` is asked once the answer is here: what was changed meanwhile is not thrown away for it. */
  private async read(wanted: () => boolean): Promise<void> {
    const { place } = this;
    if (!place) return;
    const known = this.etag;
    try {
      const { value, etag } = await this.samples.draft(place.modelId, place.sampleId);
      if (place !== this.place || !wanted() || known !== this.etag) return;
      // The same draft, under which its rows were counted already.
      const same = this.draft() !== null && etag === this.etag && this.mine() === null;
      this.etag = etag;
      this.draft.set(value);
      this.mine.set(null);
      this.readTheirs.set(null);
      if (!same) this.result.set(null);
      this.state.set('saved');
      this.failure.set(null);
    } catch (error) {
      this.failure.set(asProblem(error));
    }
  }

  /** Changes the draft and has it saved in a moment. */
  change(edit: (content: DraftContent) => DraftContent): void {
    const content = this.content();
    if (!content) return;
    const next = edit(content);
    if (next === content) return;
    this.mine.set(next);
    this.result.set(null);
    if (this.state() !== 'stale') this.state.set('unsaved');
    if (this.timer) clearTimeout(this.timer);
    this.timer = setTimeout(() => void this.flush(), saveAfterMs);
  }

  /** Saves now what has not been saved; resolves when it is, or when saving was refused (see `saveState`). */
  async flush(): Promise<void> {
    if (this.timer) clearTimeout(this.timer);
    this.timer = null;
    await this.saving;
    if (this.state() !== 'unsaved' && this.state() !== 'failed') return;
    this.saving = this.save().finally(() => (this.saving = null));
    await this.saving;
  }

  /** After a stale save: reads what is there now, to be shown beside what was changed here. */
  async compare(): Promise<void> {
    const { place } = this;
    if (!place || this.state() !== 'stale') return;
    try {
      const read = await this.samples.draft(place.modelId, place.sampleId);
      if (place !== this.place || this.state() !== 'stale') return;
      this.failure.set(null);
      // Both made the same change: there is nothing to say.
      if (sameValue(read.value.content, this.mine())) this.settle(read, null);
      else this.readTheirs.set(read);
    } catch (error) {
      this.failure.set(asProblem(error));
    }
  }

  /** After a stale save: what was changed here gives way to what is there now. */
  async takeTheirs(): Promise<void> {
    const mine = this.mine();
    await this.reload();
    if (mine && this.state() === 'saved') this.gaveWay.set({ whose: 'mine', content: mine });
  }

  /** After a stale save: own changes are saved over theirs as `theirs` has them. Saved once more meanwhile, they are asked about again. */
  async keepMine(): Promise<void> {
    const read = this.readTheirs();
    if (!read) return;
    this.settle(read, this.mine());
    await this.flush();
    if (this.state() === 'saved') this.gaveWay.set({ whose: 'theirs', content: read.value.content });
  }

  /** After a stale save: both are saved together, where nothing of one stands against the other. */
  async keepBoth(): Promise<void> {
    const read = this.readTheirs();
    const both = this.both();
    if (!read || !both) return;
    this.settle(read, both);
    await this.flush();
  }

  /** The draft that gave way comes back, and the one that is there now gives way to it. */
  bringBack(): void {
    const aside = this.gaveWay();
    const now = this.content();
    if (!aside || !now || this.state() === 'stale') return;
    this.change(() => aside.content);
    this.gaveWay.set({ whose: aside.whose === 'mine' ? 'theirs' : 'mine', content: now });
  }

  /** From here on what was read is what changes begin from. */
  private settle({ value, etag }: Tagged<Draft>, mine: DraftContent | null): void {
    this.etag = etag;
    this.draft.set(value);
    this.mine.set(mine);
    this.readTheirs.set(null);
    this.result.set(null);
    this.state.set(mine ? 'unsaved' : 'saved');
  }

  /** Counts what the saved draft gives. */
  async count(): Promise<void> {
    await this.flush();
    const { place } = this;
    if (!place || this.state() !== 'saved' || this.isChecking()) return;
    this.isChecking.set(true);
    const content = this.content();
    try {
      const found = await this.samples.check(place.modelId, place.sampleId);
      if (this.content() === content) this.result.set(found);
      this.failure.set(null);
    } catch (error) {
      this.failure.set(asProblem(error));
    } finally {
      this.isChecking.set(false);
    }
  }

  private async save(): Promise<void> {
    const { place } = this;
    const content = this.mine();
    if (!place || !content) return;
    this.state.set('saving');
    try {
      const { value, etag } = await this.samples.saveDraft(place.modelId, place.sampleId, content, this.etag);
      this.etag = etag;
      this.draft.set(value);
      this.failure.set(null);
      // What was typed while this was on its way is still to be saved.
      if (this.mine() === content) {
        this.mine.set(null);
        this.state.set('saved');
      } else this.state.set('unsaved');
    } catch (error) {
      if (isStale(error)) {
        this.state.set('stale');
        await this.compare();
      } else {
        this.state.set('failed');
        this.failure.set(asProblem(error));
      }
    }
    if (this.state() === 'unsaved') this.timer = setTimeout(() => void this.flush(), saveAfterMs);
  }
}
