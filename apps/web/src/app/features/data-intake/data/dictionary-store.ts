import { HttpClient } from '@angular/common/http';
import { Injectable, computed, inject, signal } from '@angular/core';
import type { Dictionary, DictionaryEntry } from '@tallystone/contracts/samples/dictionary';
import { firstValueFrom } from 'rxjs';
import { isStale, readTagged, saveTagged } from '../../../core/http/etag';
import { type Problem, asProblem } from '../../../core/http/problem';

export type { Dictionary, DictionaryEntry };

/** Words of one column that someone else changed too: what was typed here, and what was saved there. */
export interface WordsConflict {
  readonly mine: DictionaryEntry;
  readonly theirs: DictionaryEntry;
}

/**
 * The data dictionary of a sample under edit. Each change is saved at once, one after the other, under the tag that was read. When someone else
 * saved meanwhile theirs is read anew: words of a column that they left alone are saved on top, and for one that both changed the person says
 * which stay. What was typed is kept until then.
 */
@Injectable()
export class DictionaryStore {
  private readonly http = inject(HttpClient);
  private readonly known = signal<Dictionary | null>(null);
  private readonly failure = signal<Problem | null>(null);
  private readonly refusedFile = signal<string | null>(null);
  private readonly mine = signal<ReadonlyMap<string, DictionaryEntry>>(new Map());
  private readonly busy = signal(0);
  private etag = '';
  private changes = 0;
  private address: string | null = null;
  private saving: Promise<void> = Promise.resolve();

  readonly dictionary = this.known.asReadonly();
  readonly error = this.failure.asReadonly();
  /** Columns that someone else changed too, with what was typed here. */
  readonly conflicts = computed<readonly WordsConflict[]>(() =>
    [...this.mine().values()].map((mine) => ({ mine, theirs: this.stored(mine.column) })),
  );
  /** A file was not imported because someone else saved meanwhile. */
  readonly fileRefused = computed(() => this.refusedFile() !== null);
  readonly unsaved = computed(() => this.busy() > 0 || this.mine().size > 0 || this.refusedFile() !== null);
  readonly editable = computed(() => this.known()?.abilities.includes('edit') ?? false);

  async open(modelId: string, sampleId: string): Promise<void> {
    const address = `/api/models/${modelId}/samples/${sampleId}/dictionary`;
    if (this.address !== address) this.forget();
    // What was typed here goes on under the tag that it was typed under; otherwise whatever is there now is read.
    else if (this.known() && this.unsaved()) return;
    this.address = address;
    const before = this.changes;
    await this.read(() => before === this.changes && this.address === address);
  }

  /** `wanted` is asked once the answer is here: it may be older than what was saved from here meanwhile. */
  private async read(wanted: () => boolean): Promise<void> {
    if (this.address === null) return;
    try {
      const { value, etag } = await firstValueFrom(readTagged<Dictionary>(this.http, this.address));
      if (!wanted()) return;
      this.take(value, etag);
      this.failure.set(null);
    } catch (error) {
      this.failure.set(asProblem(error));
    }
  }

  /** What is said of a column, as it was typed here where it could not be saved. */
  entry(column: string): DictionaryEntry {
    return this.mine().get(column) ?? this.stored(column);
  }

  private stored(column: string): DictionaryEntry {
    const found = this.known()?.entries.find((entry) => entry.column === column);
    return found ?? { column, label: '', unit: '', description: '', treatments: [] };
  }

  /** Changes what is said of one column and saves it; resolves when that is done, or was refused (see `error`, `conflicts`). */
  change(entry: DictionaryEntry): Promise<void> {
    // Not yet said which stay: what is typed on is still to be kept or given up.
    if (this.mine().has(entry.column)) {
      this.hold(entry);
      return Promise.resolve();
    }
    const before = JSON.stringify(this.stored(entry.column));
    return this.inTurn((address) => this.save(address, entry, before));
  }

  private async save(address: string, entry: DictionaryEntry, before: string): Promise<void> {
    const others = (this.known()?.entries ?? []).filter(({ column }) => column !== entry.column);
    try {
      const { value, etag } = await firstValueFrom(
        saveTagged<Dictionary>(this.http, 'PUT', address, { entries: [...others, entry] }, this.etag),
      );
      this.take(value, etag);
    } catch (error) {
      if (!isStale(error)) throw error;
      const theirs = await firstValueFrom(readTagged<Dictionary>(this.http, address));
      this.take(theirs.value, theirs.etag);
      if (JSON.stringify(this.stored(entry.column)) === before) await this.save(address, entry, before);
      else if (JSON.stringify(this.stored(entry.column)) !== JSON.stringify(entry)) this.hold(entry);
    }
  }

  private hold(entry: DictionaryEntry): void {
    this.mine.update((held) => new Map([...held, [entry.column, entry]]));
  }

  /** Gives up what was typed of a column, for what someone else saved. */
  takeTheirs(column: string): void {
    this.mine.update((held) => new Map([...held].filter(([name]) => name !== column)));
  }

  /** Saves what was typed of a column over what someone else saved, which was shown before. */
  keepMine(column: string): Promise<void> {
    const entry = this.mine().get(column);
    this.takeTheirs(column);
    return entry ? this.change(entry) : Promise.resolve();
  }

  /** Takes a file; true when it was taken, false with every problem in `error`, or with `fileRefused` where someone else saved meanwhile. */
  async importFile(text: string): Promise<boolean> {
    this.refusedFile.set(null);
    await this.inTurn(async (address) => {
      try {
        const { value, etag } = await firstValueFrom(
          saveTagged<Dictionary>(this.http, 'POST', `${address}/file`, { text }, this.etag),
        );
        this.take(value, etag);
      } catch (error) {
        if (!isStale(error)) throw error;
        const theirs = await firstValueFrom(readTagged<Dictionary>(this.http, address));
        this.take(theirs.value, theirs.etag);
        this.refusedFile.set(text);
      }
    });
    return this.failure() === null && this.refusedFile() === null;
  }

  /** The file that was refused, once more, over what someone else saved. */
  async importAgain(): Promise<boolean> {
    const text = this.refusedFile();
    return text !== null && this.importFile(text);
  }

  dropFile(): void {
    this.refusedFile.set(null);
  }

  private forget(): void {
    this.known.set(null);
    this.mine.set(new Map());
    this.refusedFile.set(null);
  }

  private inTurn(work: (address: string) => Promise<void>): Promise<void> {
    this.changes++;
    this.busy.update((count) => count + 1);
    this.saving = this.saving.then(async () => {
      const { address } = this;
      try {
        if (address === null) return;
        await work(address);
        this.failure.set(null);
      } catch (error) {
        this.failure.set(asProblem(error));
      } finally {
        this.busy.update((count) => count - 1);
      }
    });
    return this.saving;
  }

  private take(value: Dictionary, etag: string): void {
    this.known.set(value);
    this.etag = etag;
  }
}
