import { ChangeDetectionStrategy, Component, ElementRef, inject } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule, Validators } from '@angular/forms';
import { MatButtonModule } from '@angular/material/button';
import { MAT_DIALOG_DATA, MatDialogModule, MatDialogRef } from '@angular/material/dialog';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import type { KeptSample, NewErasure } from '@tallystone/contracts/samples/erasure';
import { Task } from '../../../core/task';
import { ProblemList } from '../../../ui/problem-list';
import { showInvalid } from '../../../ui/show-invalid';
import { backupWords, followsWords, goesWords, staysWords } from './kept-words';

export interface EraseQuestion {
  readonly sample: KeptSample;
  /** Erases, and rejects with a Problem that the dialog shows. */
  readonly erase: (erasure: NewErasure) => Promise<unknown>;
}

/** Says what goes, what stays and what follows, and asks for the reason and for the file's name: it cannot be undone. */
@Component({
  selector: 'ts-erase-dialog',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [ReactiveFormsModule, MatButtonModule, MatDialogModule, MatFormFieldModule, MatInputModule, ProblemList],
  template: `
    <h2 mat-dialog-title>Erase the rows of sample {{ question.sample.number }}?</h2>
    <form [formGroup]="form" (ngSubmit)="submit()">
      <mat-dialog-content>
        <dl>
          <dt>Goes for good</dt>
          <dd>{{ goes }}</dd>
          <dt>Stays</dt>
          <dd>{{ stays }}</dd>
          <dt>Follows</dt>
          <dd>{{ follows }}</dd>
          <dt>Backups</dt>
          <dd>{{ backups }}</dd>
        </dl>
        <mat-form-field>
          <mat-label>Why they are erased</mat-label>
          <textarea matInput rows="3" formControlName="reason" cdkFocusInitial></textarea>
          <mat-hint>Everyone who reads the model sees this.</mat-hint>
          <mat-error>Say in a sentence why; it stays with the sample and in the record.</mat-error>
        </mat-form-field>
        <mat-form-field>
          <mat-label>Name of the file, typed again</mat-label>
          <input matInput formControlName="fileName" autocomplete="off" autocapitalize="none" spellcheck="false" />
          <mat-hint>{{ question.sample.fileName }}</mat-hint>
          <mat-error>Type {{ question.sample.fileName }}: erasing cannot be undone.</mat-error>
        </mat-form-field>
        <ts-problems [error]="task.error()" />
      </mat-dialog-content>
      <mat-dialog-actions align="end">
        <button matButton type="button" mat-dialog-close>Cancel</button>
        <button matButton="filled" class="grave" type="submit" [disabled]="task.busy()">
          {{ task.busy() ? 'Erasing' : 'Erase the rows' }}
        </button>
      </mat-dialog-actions>
    </form>
  `,
  styles: `
    mat-dialog-content {
      display: grid;
      gap: 20px;
    }
    dl {
      display: grid;
      gap: 2px;
      margin: 0;
    }
    dt {
      font-weight: 600;
    }
    dd {
      margin: 0 0 8px;
      overflow-wrap: anywhere;
    }
    .grave {
      --mat-button-filled-container-color: var(--ts-bad);
      --mat-button-filled-label-text-color: var(--ts-paper);
    }
  `,
})
export class EraseDialog {
  private readonly element = inject<ElementRef<HTMLElement>>(ElementRef).nativeElement;
  private readonly reference = inject<MatDialogRef<EraseDialog, boolean>>(MatDialogRef);
  protected readonly question = inject<EraseQuestion>(MAT_DIALOG_DATA);
  protected readonly goes = goesWords(this.question.sample);
  protected readonly stays = staysWords;
  protected readonly follows = followsWords(this.question.sample);
  protected readonly backups = backupWords;
  protected readonly task = new Task();
  protected readonly form = new FormGroup({
    reason: new FormControl('', { nonNullable: true, validators: [Validators.required, Validators.pattern(/^\s*\S[\s\S]{8,}\S\s*$/), Validators.maxLength(2000)] }),
    fileName: new FormControl('', {
      nonNullable: true,
      validators: [Validators.required, (control) => (control.value === this.question.sample.fileName ? null : { another: true })],
    }),
  });

  protected submit(): void {
    if (this.form.invalid) {
      showInvalid(this.form, this.element);
      return;
    }
    const { reason, fileName } = this.form.getRawValue();
    void this.task.run(async () => {
      await this.question.erase({ reason: reason.trim(), fileName });
      this.reference.close(true);
    });
  }
}
