import { ChangeDetectionStrategy, Component, ElementRef, inject, signal } from '@angular/core';
import { NonNullableFormBuilder, ReactiveFormsModule, Validators } from '@angular/forms';
import { MatButtonModule } from '@angular/material/button';
import { MAT_DIALOG_DATA, MatDialogModule, MatDialogRef } from '@angular/material/dialog';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import type { Role } from '@tallystone/contracts/people/schema';
import { Task } from '../../../core/task';
import { ProblemList } from '../../../ui/problem-list';
import { RoleChoice } from './role-choice';
import { showInvalid } from '../../../ui/show-invalid';

export interface InviteQuestion {
  readonly send: (body: { name: string; email: string; roles: readonly Role[] }) => Promise<unknown>;
}

/** Invites a person: the link goes out by mail and is good once. */
@Component({
  selector: 'ts-invite-dialog',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [ReactiveFormsModule, MatButtonModule, MatDialogModule, MatFormFieldModule, MatInputModule, ProblemList, RoleChoice],
  template: `
    <h2 mat-dialog-title>Invite a person</h2>
    <form [formGroup]="form" (ngSubmit)="submit()">
      <mat-dialog-content>
        <mat-form-field>
          <mat-label>Name</mat-label>
          <input matInput formControlName="name" autocomplete="off" />
          <mat-error>Give a name.</mat-error>
        </mat-form-field>
        <mat-form-field>
          <mat-label>E-mail address</mat-label>
          <input matInput type="email" formControlName="email" autocomplete="off" autocapitalize="none" spellcheck="false" />
          <mat-hint>The invitation goes there; it is good once.</mat-hint>
          <mat-error>Give an e-mail address.</mat-error>
        </mat-form-field>
        <ts-role-choice [(chosen)]="roles" />
        <ts-problems [error]="task.error()" />
      </mat-dialog-content>
      <mat-dialog-actions align="end">
        <button matButton type="button" mat-dialog-close>Cancel</button>
        <button matButton="filled" type="submit" [disabled]="task.busy()">Send the invitation</button>
      </mat-dialog-actions>
    </form>
  `,
  styles: `
    mat-dialog-content {
      display: grid;
      gap: 16px;
    }
  `,
})
export class InviteDialog {
  private readonly element = inject<ElementRef<HTMLElement>>(ElementRef).nativeElement;
  private readonly question = inject<InviteQuestion>(MAT_DIALOG_DATA);
  private readonly reference = inject<MatDialogRef<InviteDialog, boolean>>(MatDialogRef);
  protected readonly roles = signal<readonly Role[]>([]);
  protected readonly task = new Task();
  protected readonly form = inject(NonNullableFormBuilder).group({
    name: ['', [Validators.required, Validators.pattern(/\S/), Validators.maxLength(200)]],
    email: ['', [Validators.required, Validators.email]],
  });

  protected submit(): void {
    if (this.form.invalid) {
      showInvalid(this.form, this.element);
      return;
    }
    void this.task.run(async () => {
      await this.question.send({ ...this.form.getRawValue(), roles: this.roles() });
      this.reference.close(true);
    });
  }
}
