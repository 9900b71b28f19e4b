import { ChangeDetectionStrategy, Component, ElementRef, inject, signal } from '@angular/core';
import { NonNullableFormBuilder, ReactiveFormsModule, Validators } from '@angular/forms';
import { MatButtonModule } from '@angular/material/button';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import { Router, RouterLink } from '@angular/router';
import { Session } from '../../../core/session';
import { Task } from '../../../core/task';
import { NewPassword, newPasswordControl } from '../../../ui/new-password';
import { ProblemList } from '../../../ui/problem-list';
import { Entry } from '../data/entry';
import { Doorway } from '../ui/doorway';
import { showInvalid } from '../../../ui/show-invalid';

/** Makes the first admin, once, with the token that the server wrote at its first start. There are no default accounts. */
@Component({
  selector: 'ts-set-up-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [
    ReactiveFormsModule,
    RouterLink,
    MatButtonModule,
    MatFormFieldModule,
    MatInputModule,
    Doorway,
    NewPassword,
    ProblemList,
  ],
  template: `
    <ts-doorway
      title="Set Tallystone up"
      text="The first account is an admin’s: it invites everyone else and approves nothing itself."
    >
      @if (open() === false) {
        <p>The first account exists already, so this page has done its work.</p>
        <div class="ts-actions"><a matButton="filled" routerLink="/sign-in">Sign in</a></div>
      } @else {
        <form class="ts-form" [formGroup]="form" (ngSubmit)="submit()">
          <mat-form-field>
            <mat-label>One-time token</mat-label>
            <input matInput formControlName="token" autocomplete="off" autocapitalize="none" spellcheck="false" />
            <mat-hint>Printed by the server when it first started.</mat-hint>
            <mat-error>Give the token as the server printed it.</mat-error>
          </mat-form-field>
          <mat-form-field>
            <mat-label>Your name</mat-label>
            <input matInput formControlName="name" autocomplete="name" />
            <mat-error>Give the name that the record of actions will show.</mat-error>
          </mat-form-field>
          <mat-form-field>
            <mat-label>E-mail address</mat-label>
            <input
              matInput
              type="email"
              formControlName="email"
              autocomplete="username"
              autocapitalize="none"
              spellcheck="false"
            />
            <mat-error>Give an e-mail address.</mat-error>
          </mat-form-field>
          <ts-new-password [control]="form.controls.password" />
          <ts-problems [error]="task.error()" />
          <div class="ts-actions">
            <button matButton="filled" type="submit" [disabled]="task.busy()">Open the first account</button>
          </div>
        </form>
      }
    </ts-doorway>
  `,
})
export class SetUpPage {
  private readonly element = inject<ElementRef<HTMLElement>>(ElementRef).nativeElement;
  private readonly entry = inject(Entry);
  private readonly session = inject(Session);
  private readonly router = inject(Router);

  protected readonly task = new Task();
  protected readonly open = signal<boolean | null>(null);
  protected readonly form = inject(NonNullableFormBuilder).group({
    token: ['', [Validators.required, Validators.minLength(20)]],
    name: ['', [Validators.required, Validators.pattern(/\S/)]],
    email: ['', [Validators.required, Validators.email]],
    password: newPasswordControl(),
  });

  constructor() {
    void this.task.run(async () => {
      await this.session.load(); // brings the XSRF cookie
      this.open.set(await this.entry.setUpOpen());
    });
  }

  protected submit(): void {
    if (this.form.invalid) {
      showInvalid(this.form, this.element);
      return;
    }
    const value = this.form.getRawValue();
    void this.task.run(async () => {
      const { email } = await this.entry.setUp({ ...value, token: value.token.trim() });
      await this.router.navigate(['/sign-in'], { queryParams: { email, welcome: '' } });
    });
  }
}
