import { ChangeDetectionStrategy, Component, ElementRef, inject } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule, Validators } from '@angular/forms';
import { MatButtonModule } from '@angular/material/button';
import { MAT_DIALOG_DATA, MatDialogModule, MatDialogRef } from '@angular/material/dialog';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import type { ProtectedColumn } from '@tallystone/contracts/permissions/schema';
import { Task } from '../../../core/task';
import { ProblemList } from '../../../ui/problem-list';
import { showInvalid } from '../../../ui/show-invalid';

export interface PermitQuestion {
  readonly column: ProtectedColumn;
  /** Permits, and rejects with a Problem that the dialog shows. */
  readonly permit: (citation: string, reason: string) => Promise<unknown>;
}

/** Asks compliance for the legal basis and the reason. What the modeller proposes is shown beside it and never filled in. */
@Component({
  selector: 'ts-permit-dialog',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [ReactiveFormsModule, MatButtonModule, MatDialogModule, MatFormFieldModule, MatInputModule, ProblemList],
  template: `
    <h2 mat-dialog-title>Permit {{ question.column.column }}?</h2>
    <form [formGroup]="form" (ngSubmit)="submit()">
      <mat-dialog-content>
        <p>
          Binnings and fits of this definition may then take it. It is recorded with your name, printed in the governance document, and can be
          withdrawn until a version is frozen with it.
        </p>
        @if (question.column.proposed) {
          <p>The modeller proposes “{{ question.column.proposed }}”.</p>
        }
        <mat-form-field>
          <mat-label>Citation that permits it</mat-label>
          <input matInput formControlName="citation" autocomplete="off" cdkFocusInitial />
          <mat-error>Cite the legal basis that permits it.</mat-error>
        </mat-form-field>
        <mat-form-field>
          <mat-label>Why it applies</mat-label>
          <textarea matInput rows="3" formControlName="reason"></textarea>
          <mat-error>Say in a sentence why; it stays with the definition and in the record.</mat-error>
        </mat-form-field>
        <ts-problems [error]="task.error()" />
      </mat-dialog-content>
      <mat-dialog-actions align="end">
        <button matButton type="button" mat-dialog-close>Cancel</button>
        <button matButton="filled" type="submit" [disabled]="task.busy()">Permit</button>
      </mat-dialog-actions>
    </form>
  `,
  styles: `
    mat-dialog-content {
      display: grid;
      gap: 16px;
    }
    p {
      overflow-wrap: anywhere;
    }
  `,
})
export class PermitDialog {
  private readonly element = inject<ElementRef<HTMLElement>>(ElementRef).nativeElement;
  private readonly reference = inject<MatDialogRef<PermitDialog, boolean>>(MatDialogRef);
  protected readonly question = inject<PermitQuestion>(MAT_DIALOG_DATA);
  protected readonly task = new Task();
  protected readonly form = new FormGroup({
    citation: new FormControl('', { nonNullable: true, validators: [Validators.required, Validators.pattern(/^\s*\S[\s\S]*\S[\s\S]*\S\s*$/), Validators.maxLength(1000)] }),
    reason: new FormControl('', { nonNullable: true, validators: [Validators.required, Validators.pattern(/^\s*\S[\s\S]{8,}\S\s*$/), Validators.maxLength(2000)] }),
  });

  protected submit(): void {
    if (this.form.invalid) {
      showInvalid(this.form, this.element);
      return;
    }
    const { citation, reason } = this.form.getRawValue();
    void this.task.run(async () => {
      await this.question.permit(citation.trim(), reason.trim());
      this.reference.close(true);
    });
  }
}
