import { HttpClient } from '@angular/common/http';
import { Injectable, computed, inject, signal } from '@angular/core';
import type { Dictionary, DictionaryEntry } from '@tallystone/contracts/samples/dictionary';
import { firstValueFrom } from 'rxjs';
import { isStale, readTagged, saveTagged } from '../../../core/http/etag';
import { type Problem, asProblem } from '../../../core/http/problem';

export type { Dictionary, DictionaryEntry };

/**
 * The data dictionary of a sample under edit. Each change is saved at once, one after the other, under the tag that was read; when someone else
 * saved meanwhile theirs is read anew, and whether the change still holds is for the person to say.
 */
@Injectable()
export class DictionaryStore {
  private readonly http = inject(HttpClient);
  private readonly known = signal<Dictionary | null>(null);
  private readonly failure = signal<Problem | null>(null);
  private readonly isStale = signal(false);
  private readonly busy = signal(0);
  private etag = '';
  private address: string | null = null;
  private saving: Promise<void> = Promise.resolve();

  readonly dictionary = this.known.asReadonly();
  readonly error = this.failure.asReadonly();
  /** Someone else saved; the last change was not. */
  readonly stale = this.isStale.asReadonly();
  readonly unsaved = computed(() => this.busy() > 0);
  readonly editable = computed(() => this.known()?.abilities.includes('edit') ?? false);

  async open(modelId: string, sampleId: string): Promise<void> {
    const address = `/api/models/${modelId}/samples/${sampleId}/dictionary`;
    if (this.address === address && this.known()) return;
    this.address = address;
    await this.reload();
  }

  async reload(): Promise<void> {
    if (this.address === null) return;
    try {
      const { value, etag } = await firstValueFrom(readTagged<Dictionary>(this.http, this.address));
      this.take(value, etag);
      this.failure.set(null);
    } catch (error) {
      this.failure.set(asProblem(error));
    }
  }

  entry(column: string): DictionaryEntry {
    const found = this.known()?.entries.find((entry) => entry.column === column);
    return found ?? { column, label: '', unit: '', description: '', treatments: [] };
  }

  /** Changes what is said of one column and saves it; resolves when that is done, or was refused (see `error`, `stale`). */
  change(entry: DictionaryEntry): Promise<void> {
    return this.inTurn(async (address) => {
      const others = (this.known()?.entries ?? []).filter(({ column }) => column !== entry.column);
      const { value, etag } = await firstValueFrom(
        saveTagged<Dictionary>(this.http, 'PUT', address, { entries: [...others, entry] }, this.etag),
      );
      this.take(value, etag);
    });
  }

  /** Takes a file; true when it was taken, false with every problem in `error`. */
  async importFile(text: string): Promise<boolean> {
    await this.inTurn(async (address) => {
      const { value, etag } = await firstValueFrom(
        saveTagged<Dictionary>(this.http, 'POST', `${address}/file`, { text }, this.etag),
      );
      this.take(value, etag);
    });
    return this.failure() === null && !this.isStale();
  }

  private inTurn(work: (address: string) => Promise<void>): Promise<void> {
    this.busy.update((count) => count + 1);
    this.saving = this.saving.then(async () => {
      const { address } = this;
      try {
        if (address === null) return;
        this.isStale.set(false);
        await work(address);
        this.failure.set(null);
      } catch (error) {
        if (isStale(error)) {
          await this.reload();
          this.isStale.set(true);
        } else this.failure.set(asProblem(error));
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
