import { ChangeDetectionStrategy, Component, ElementRef, inject, signal } from '@angular/core';
import { ReactiveFormsModule } from '@angular/forms';
import { MatButtonModule } from '@angular/material/button';
import { Router, RouterLink } from '@angular/router';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { Task } from '../../../core/task';
import { type HoldsWork, warnBeforeUnload } from '../../../core/unsaved-changes';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { type ModelFields, Models } from '../data/inventory';
import { ModelFormFields, modelForm } from '../ui/model-form';
import { showInvalid } from '../../../ui/show-invalid';

/** Enters a model in the inventory; whoever enters it is its first member. */
@Component({
  selector: 'ts-new-model-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [ReactiveFormsModule, RouterLink, MatButtonModule, ModelFormFields, PageHeader, ProblemList],
  host: { class: 'ts-page' },
  template: `
    <div class="ts-stack">
      <ts-page-header title="New model" finding="It gets an inventory number, and you become its first modeller." />
      <form class="ts-form" (ngSubmit)="submit()" [formGroup]="form">
        <ts-model-form [form]="form" />
        <ts-problems [error]="task.error()" />
        <div class="ts-actions">
          <button matButton="filled" type="submit" [disabled]="task.busy()">Enter the model</button>
          <a matButton routerLink="/models">Cancel</a>
        </div>
      </form>
    </div>
  `,
})
export class NewModelPage implements HoldsWork {
  private readonly element = inject<ElementRef<HTMLElement>>(ElementRef).nativeElement;
  private readonly models = inject(Models);
  private readonly router = inject(Router);

  protected readonly form = modelForm();
  protected readonly task = new Task();
  readonly unsaved = signal(false);

  constructor() {
    this.form.valueChanges.pipe(takeUntilDestroyed()).subscribe(() => this.unsaved.set(this.form.dirty));
    warnBeforeUnload(this.unsaved);
  }

  protected submit(): void {
    if (this.form.invalid) {
      showInvalid(this.form, this.element);
      return;
    }
    void this.task.run(async () => {
      const model = await this.models.create(this.form.getRawValue() as ModelFields);
      this.unsaved.set(false);
      await this.router.navigate(['/models', model.id, 'sample']);
    });
  }
}
