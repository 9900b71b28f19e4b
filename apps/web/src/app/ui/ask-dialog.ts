import { ChangeDetectionStrategy, Component, inject, signal } from '@angular/core';
import { FormControl, ReactiveFormsModule, Validators } from '@angular/forms';
import { MatButtonModule } from '@angular/material/button';
import { MAT_DIALOG_DATA, MatDialogModule, MatDialogRef } from '@angular/material/dialog';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import { MatRadioModule } from '@angular/material/radio';

export interface Question {
  readonly title: string;
  /** What will happen, in a sentence or two. */
  readonly text?: string;
  /** The button that does it, a verb: "Freeze", "Open out-of-time". */
  readonly accept: string;
  readonly cancel?: string;
  /** Marks something that cannot be undone. */
  readonly grave?: boolean;
  /** Asks why. A short list to choose from, free text, or both (the list's last entry then opens the text). */
  readonly reason?: {
    readonly label: string;
    readonly choices?: readonly string[];
    readonly text?: boolean;
    readonly required?: boolean;
    readonly hint?: string;
  };
}

export interface Answer {
  readonly reason: string;
}

const other = 'Another reason';

@Component({
  selector: 'ts-ask-dialog',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [ReactiveFormsModule, MatButtonModule, MatDialogModule, MatFormFieldModule, MatInputModule, MatRadioModule],
  template: `
    <h2 mat-dialog-title>{{ question.title }}</h2>
    <form (submit)="accept($event)">
      <mat-dialog-content>
        @if (question.text) {
          <p>{{ question.text }}</p>
        }
        @if (question.reason; as reason) {
          @if (choices.length > 0) {
            <mat-radio-group [formControl]="choice" [attr.aria-label]="reason.label">
              @for (entry of choices; track entry) {
                <mat-radio-button [value]="entry">{{ entry }}</mat-radio-button>
              }
            </mat-radio-group>
            @if (unanswered() && choice.value === '') {
              <p class="refused" role="alert">Say why; it is kept in the record.</p>
            }
          }
          @if (writes()) {
            <mat-form-field appearance="outline" subscriptSizing="dynamic">
              <mat-label>{{ reason.label }}</mat-label>
              <textarea matInput rows="3" [formControl]="text" cdkFocusInitial></textarea>
              @if (reason.hint) {
                <mat-hint>{{ reason.hint }}</mat-hint>
              }
              <mat-error>Say why; it is kept in the record.</mat-error>
            </mat-form-field>
          }
        }
      </mat-dialog-content>
      <mat-dialog-actions align="end">
        <button matButton type="button" mat-dialog-close>{{ question.cancel ?? 'Cancel' }}</button>
        <button matButton="filled" type="submit" [class.grave]="question.grave">{{ question.accept }}</button>
      </mat-dialog-actions>
    </form>
  `,
  styles: `
    mat-dialog-content {
      display: grid;
      gap: 16px;
    }
    mat-radio-group {
      display: grid;
    }
    .refused {
      color: var(--mat-sys-error);
    }
    .grave {
      --mat-button-filled-container-color: var(--ts-bad);
      --mat-button-filled-label-text-color: var(--ts-paper);
    }
  `,
})
export class AskDialog {
  protected readonly question = inject<Question>(MAT_DIALOG_DATA);
  private readonly reference = inject<MatDialogRef<AskDialog, Answer>>(MatDialogRef);
  protected readonly choices: readonly string[] = this.choicesOf(this.question);
  /** None to begin with: what goes into the record as a person's reason is what they chose. */
  protected readonly choice = new FormControl('', { nonNullable: true });
  protected readonly unanswered = signal(false);
  protected readonly text = new FormControl('', {
    nonNullable: true,
    validators: this.question.reason?.required === false ? [] : [Validators.required, Validators.pattern(/\S/)],
  });

  protected writes(): boolean {
    const reason = this.question.reason;
    if (!reason) return false;
    return this.choices.length === 0 || this.choice.value === other;
  }

  protected accept(event: Event): void {
    event.preventDefault();
    if (this.choices.length > 0 && this.choice.value === '' && this.question.reason?.required !== false) {
      this.unanswered.set(true);
      return;
    }
    if (this.writes() && this.text.invalid) {
      this.text.markAsTouched();
      return;
    }
    this.reference.close({ reason: this.writes() ? this.text.value.trim() : this.choice.value });
  }

  private choicesOf(question: Question): readonly string[] {
    const given = question.reason?.choices ?? [];
    return given.length > 0 && question.reason?.text ? [...given, other] : given;
  }
}
