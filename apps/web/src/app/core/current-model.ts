import { HttpClient } from '@angular/common/http';
import { Injectable, Injector, computed, inject, signal } from '@angular/core';
import type { Model, ModelWork, WorkStep } from '@tallystone/contracts/models/schema';
import { firstValueFrom } from 'rxjs';
import { tagged } from './http/etag';
import { type Problem, asProblem } from './http/problem';
import { Session } from './session';

export type { Model, WorkStep };

/**
 * The model whose pages are open: what is written about it, its state, how far the work has come and what this person may do with it.
 * Kept by the model frame; a step calls `reload()` after it has changed something that the work's rule shows.
 *
 * @example
 * private readonly current = inject(CurrentModel);
 * protected readonly mayDevelop = computed(() => this.current.can('develop'));
 */
@Injectable({ providedIn: 'root' })
export class CurrentModel {
  private readonly http = inject(HttpClient);
  /** Asked for the session when it is needed: the session knows the router, and the router's titles know the model. */
  private readonly injector = inject(Injector);
  private readonly value = signal<Model | null>(null);
  private readonly work = signal<readonly WorkStep[]>([]);
  private readonly failed = signal<Problem | null>(null);
  private wanted: string | null = null;

  readonly model = this.value.asReadonly();
  readonly steps = this.work.asReadonly();
  readonly problem = this.failed.asReadonly();
  /** Goes back as If-Match when the model's own fields are changed. */
  readonly etag = signal('');
  readonly id = computed(() => this.value()?.id ?? null);
  readonly name = computed(() => this.value()?.name ?? null);
  private readonly abilities = computed<ReadonlySet<string>>(() => new Set(this.value()?.abilities ?? []));

  can(ability: Model['abilities'][number]): boolean {
    return this.abilities().has(ability);
  }

  async open(id: string): Promise<void> {
    if (this.wanted !== id) this.close();
    this.wanted = id;
    await this.reload();
  }

  async reload(): Promise<void> {
    const id = this.wanted;
    if (id === null) return;
    try {
      const [model, work] = await Promise.all([
        firstValueFrom(this.http.get<Model>(`/api/models/${id}`, { observe: 'response' })),
        // How far the work has come is inside the model: an admin sees what the inventory says of it and no more.
        this.injector.get(Session).can('models.read-content') ? firstValueFrom(this.http.get<ModelWork>(`/api/models/${id}/work`)) : { steps: [] },
      ]);
      if (this.wanted !== id) return;
      const { value, etag } = tagged(model);
      this.value.set(value);
      this.etag.set(etag);
      this.work.set(work.steps);
      this.failed.set(null);
    } catch (error) {
      if (this.wanted === id) this.failed.set(asProblem(error));
    }
  }

  close(): void {
    this.wanted = null;
    this.value.set(null);
    this.work.set([]);
    this.failed.set(null);
    this.etag.set('');
  }
}
