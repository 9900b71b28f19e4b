import { ChangeDetectionStrategy, Component, computed, ElementRef, inject, signal } from '@angular/core';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { ReactiveFormsModule } from '@angular/forms';
import { MatButtonModule } from '@angular/material/button';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatSelectModule } from '@angular/material/select';
import { RouterLink } from '@angular/router';
import { CurrentModel, type Model } from '../../../core/current-model';
import { isStale } from '../../../core/http/etag';
import { Task } from '../../../core/task';
import { type HoldsWork, warnBeforeUnload } from '../../../core/unsaved-changes';
import { Ask } from '../../../ui/ask';
import { DecisionNotice } from '../../../ui/decision-notice';
import { DayPipe, MomentPipe } from '../../../ui/number-pipes';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { type ModelFields, Models } from '../data/inventory';
import { ModelFormFields, modelForm } from '../ui/model-form';
import { showInvalid } from '../../../ui/show-invalid';

export const fieldNames: Readonly<Record<keyof ModelFields, string>> = {
  name: 'Name',
  purpose: 'Purpose',
  product: 'Product',
  population: 'Population',
  jurisdiction: 'Jurisdiction',
  owner: 'Owner',
  materialityTier: 'Materiality tier',
  intendedUse: 'Intended use',
  prohibitedUse: 'Prohibited use',
};
const keys = Object.keys(fieldNames) as (keyof ModelFields)[];

/** Where the same field was changed by someone else and here. */
interface Clash {
  readonly key: keyof ModelFields;
  readonly theirs: string;
  readonly mine: string;
}

/** What is written about a model, and who works on it. */
@Component({
  selector: 'ts-about-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [
    ReactiveFormsModule,
    RouterLink,
    MatButtonModule,
    MatFormFieldModule,
    MatSelectModule,
    DecisionNotice,
    DayPipe,
    MomentPipe,
    ModelFormFields,
    PageHeader,
    ProblemList,
  ],
  host: { class: 'ts-page' },
  templateUrl: './about-page.html',
  styles: `
    .members li {
      display: flex;
      flex-wrap: wrap;
      align-items: center;
      justify-content: space-between;
      gap: 0 16px;
      list-style: none;
      padding: 6px 0;
      min-height: 44px;
      border-bottom: 1px solid var(--ts-hairline);
    }
    .members .ts-caption {
      display: block;
    }
    .add {
      display: grid;
      grid-template-columns: minmax(0, 1fr) auto;
      align-items: center;
      gap: 12px;
      margin-top: 14px;
    }
    dd {
      white-space: pre-line;
      max-width: var(--ts-measure);
    }
    .clash {
      display: grid;
      gap: 2px;
      padding: 6px 0;
    }
  `,
})
export class AboutPage implements HoldsWork {
  private readonly element = inject<ElementRef<HTMLElement>>(ElementRef).nativeElement;
  private readonly models = inject(Models);
  private readonly current = inject(CurrentModel);
  private readonly ask = inject(Ask);

  protected readonly keys = keys;
  protected readonly fieldNames = fieldNames;
  protected readonly model = this.current.model;
  protected readonly mayEdit = computed(() => this.current.can('edit'));
  protected readonly mayManage = computed(() => this.current.can('manage-members'));
  protected readonly editing = signal(false);
  protected readonly saving = new Task();
  protected readonly membership = new Task();
  protected readonly clashes = signal<readonly Clash[]>([]);
  protected readonly candidates = signal<
    readonly { readonly id: string; readonly name: string; readonly email: string }[] | null
  >(null);
  protected readonly chosen = signal<string | null>(null);
  protected readonly form = modelForm();
  readonly unsaved = signal(false);
  private base: Model | null = null;
  private etag = '';

  constructor() {
    this.form.valueChanges.pipe(takeUntilDestroyed()).subscribe(() => this.unsaved.set(this.editing() && this.form.dirty));
    warnBeforeUnload(this.unsaved);
  }

  protected shown(key: keyof ModelFields): string | number {
    return this.model()?.[key] || 'not written yet';
  }

  protected edit(): void {
    const model = this.model();
    if (!model) return;
    this.base = model;
    this.etag = this.current.etag();
    this.form.reset(this.fieldsOf(model));
    this.editing.set(true);
  }

  protected stop(): void {
    this.editing.set(false);
    this.unsaved.set(false);
    this.saving.clear();
    this.clashes.set([]);
  }

  protected save(): void {
    if (this.form.invalid) {
      showInvalid(this.form, this.element);
      return;
    }
    const { base } = this;
    if (!base) return;
    const mine = this.form.getRawValue() as ModelFields;
    const changed = Object.fromEntries(keys.filter((key) => mine[key] !== base[key]).map((key) => [key, mine[key]]));
    if (Object.keys(changed).length === 0) {
      this.stop();
      return;
    }
    void this.saving.run(async () => {
      try {
        await this.models.edit(base.id, changed, this.etag);
      } catch (error) {
        if (isStale(error)) await this.compare(base, mine);
        throw error;
      }
      await this.current.reload();
      this.stop();
    });
  }

  /** Takes what the other person wrote into the form, or keeps what is there; either way the next save is against their state. */
  protected settle(take: 'theirs' | 'mine'): void {
    const theirs = this.base;
    if (take === 'theirs' && theirs) {
      for (const { key } of this.clashes()) this.form.controls[key].setValue(theirs[key] as never);
    }
    this.clashes.set([]);
    this.saving.clear();
  }

  protected openCandidates(): void {
    const id = this.model()?.id;
    if (!id || this.candidates()) return;
    void this.membership.run(async () => this.candidates.set(await this.models.candidates(id)));
  }

  protected add(): void {
    const id = this.model()?.id;
    const personId = this.chosen();
    if (!id || !personId) return;
    void this.membership.run(async () => {
      await this.models.addMember(id, personId);
      this.chosen.set(null);
      this.candidates.set(null);
      await this.current.reload();
    });
  }

  protected async remove(member: Model['members'][number]): Promise<void> {
    const id = this.model()?.id;
    if (!id) return;
    const answer = await this.ask.for({
      title: `End ${member.name}’s work on this model?`,
      text: 'What they did stays, with their name. They no longer see the model unless another role lets them.',
      accept: 'End it',
    });
    if (!answer) return;
    await this.membership.run(async () => {
      await this.models.removeMember(id, member.personId);
      this.candidates.set(null);
      await this.current.reload();
    });
  }

  /** Someone saved first: fields only they changed are taken over, fields both changed are put side by side. */
  private async compare(base: Model, mine: ModelFields): Promise<void> {
    const { value: theirs, etag } = await this.models.read(base.id);
    const clashes: Clash[] = [];
    for (const key of keys) {
      if (theirs[key] === base[key]) continue;
      if (mine[key] === base[key]) this.form.controls[key].setValue(theirs[key] as never);
      else if (mine[key] !== theirs[key]) clashes.push({ key, theirs: String(theirs[key]), mine: String(mine[key]) });
    }
    this.base = theirs;
    this.etag = etag;
    this.clashes.set(clashes);
  }

  private fieldsOf(model: Model): ModelFields {
    return Object.fromEntries(keys.map((key) => [key, model[key]])) as ModelFields;
  }
}
