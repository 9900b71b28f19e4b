import { ChangeDetectionStrategy, Component, computed, effect, inject, input, output, signal, untracked } from '@angular/core';
import { toSignal } from '@angular/core/rxjs-interop';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { MatButtonModule } from '@angular/material/button';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import type { TextsState, VersionTextKey, VersionTexts } from '@tallystone/contracts/versions/schema';
import { type Tagged, isStale } from '../../../core/http/etag';
import { Task } from '../../../core/task';
import { DecisionNotice } from '../../../ui/decision-notice';
import { moment } from '../../../ui/numbers';
import { ProblemList } from '../../../ui/problem-list';
import { Versions } from '../data/versions';
import { type TextConflict, mergeTexts, textSections } from '../ui/version-view';

const control = () => new FormControl('', { nonNullable: true });

/**
 * The author's texts by section of the document. When somebody else saved first, sections that only one side changed are merged; where both
 * changed the same one, both stand side by side until a person says which stays.
 */
@Component({
  selector: 'ts-texts-editor',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [MatButtonModule, MatFormFieldModule, MatInputModule, ReactiveFormsModule, DecisionNotice, ProblemList],
  templateUrl: './texts-editor.html',
  styleUrl: './texts-editor.scss',
})
export class TextsEditor {
  private readonly versions = inject(Versions);
  readonly versionId = input.required<string>();
  readonly saved = output();

  private readonly tagged = signal<Tagged<TextsState> | null>(null);
  protected readonly problem = signal<unknown>(null);
  protected readonly saving = new Task();
  protected readonly conflicts = signal<readonly TextConflict[]>([]);
  protected readonly sections = textSections;
  protected readonly form = new FormGroup(
    Object.fromEntries(textSections.map(({ key }) => [key, control()])) as Record<VersionTextKey, FormControl<string>>,
  );
  private readonly changed = toSignal(this.form.valueChanges);
  protected readonly state = computed(() => this.tagged()?.value ?? null);
  protected readonly mayEdit = computed(() => this.state()?.abilities.includes('edit') ?? false);
  readonly unsaved = computed(() => {
    this.changed();
    return this.form.dirty;
  });
  protected readonly written = computed(() => {
    this.changed();
    const state = this.state();
    return textSections.filter(({ key }) => (this.mayEdit() ? this.form.controls[key].value : (state?.texts[key] ?? '')).trim() !== '').length;
  });
  protected readonly savedWords = computed(() => {
    const state = this.state();
    if (this.unsaved()) return 'Changes are not saved yet.';
    return state?.changedAt ? `Saved ${moment(state.changedAt)}${state.changedBy ? ` by ${state.changedBy}` : ''}.` : '';
  });

  constructor() {
    effect(() => {
      const id = this.versionId();
      untracked(() => void this.read(id));
    });
  }

  protected async save(): Promise<void> {
    const state = this.tagged();
    if (!state) return;
    const mine = this.mine();
    const saved = await this.saving.run(() => this.versions.saveTexts(this.versionId(), mine, state.etag));
    if (saved) {
      this.take(saved);
      this.saved.emit();
      return;
    }
    if (isStale(this.saving.error())) await this.merge(state.value.texts, mine);
  }

  protected settle(conflict: TextConflict, which: 'theirs' | 'mine'): void {
    this.form.controls[conflict.key].setValue(conflict[which]);
    this.form.markAsDirty();
    this.conflicts.update((conflicts) => conflicts.filter((entry) => entry !== conflict));
  }

  protected titleOf(key: VersionTextKey): string {
    return textSections.find((entry) => entry.key === key)?.title ?? key;
  }

  private mine(): VersionTexts {
    return Object.fromEntries(Object.entries(this.form.getRawValue()).filter(([, text]) => text !== ''));
  }

  private async merge(base: VersionTexts, mine: VersionTexts): Promise<void> {
    this.saving.clear();
    const theirs = await this.versions.readTexts(this.versionId());
    const { texts, conflicts } = mergeTexts(base, theirs.value.texts, mine);
    this.tagged.set(theirs);
    for (const { key } of textSections) this.form.controls[key].setValue(texts[key] ?? '');
    this.form.markAsDirty();
    this.conflicts.set(conflicts);
    if (conflicts.length === 0) await this.save();
  }

  private async read(versionId: string): Promise<void> {
    try {
      this.take(await this.versions.readTexts(versionId));
      this.problem.set(null);
    } catch (error) {
      this.problem.set(error);
    }
  }

  private take(state: Tagged<TextsState>): void {
    this.tagged.set(state);
    this.conflicts.set([]);
    for (const { key } of textSections) this.form.controls[key].setValue(state.value.texts[key] ?? '');
    this.form.markAsPristine();
    // The signal of changes was read before the form became pristine.
    this.form.updateValueAndValidity();
  }
}
