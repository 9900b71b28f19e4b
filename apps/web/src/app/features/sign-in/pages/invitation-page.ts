import { ChangeDetectionStrategy, Component, ElementRef, inject, input, type OnInit, signal } from '@angular/core';
import { NonNullableFormBuilder, ReactiveFormsModule, Validators } from '@angular/forms';
import { MatButtonModule } from '@angular/material/button';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import { Router } from '@angular/router';
import { Session } from '../../../core/session';
import { Task } from '../../../core/task';
import { NewPassword, newPasswordControl } from '../../../ui/new-password';
import { DayPipe } from '../../../ui/number-pipes';
import { ProblemList } from '../../../ui/problem-list';
import { Entry } from '../data/entry';
import { Doorway } from '../ui/doorway';
import { showInvalid } from '../../../ui/show-invalid';

/** An invited person sets a password; the link they came by is good once. */
@Component({
  selector: 'ts-invitation-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [ReactiveFormsModule, MatButtonModule, MatFormFieldModule, MatInputModule, DayPipe, Doorway, NewPassword, ProblemList],
  template: `
    <ts-doorway title="Your invitation" [text]="email() ? 'Set a password to open your account.' : null">
      <ts-problems
        [error]="looking.error()"
        next="An invitation is good once and for a limited time. Ask the admin who invited you for a new one."
      />
      @if (email()) {
        <form class="ts-form" [formGroup]="form" (ngSubmit)="submit()">
          <dl class="ts-pairs">
            <dt>Account</dt>
            <dd>{{ email() }}</dd>
            <dt>Open until</dt>
            <dd>{{ expires() | tsDay }}</dd>
          </dl>
          <!-- For password managers, which want to know whose password this is. -->
          <input
            class="ts-hidden"
            type="text"
            autocomplete="username"
            tabindex="-1"
            aria-hidden="true"
            readonly
            [value]="email()"
          />
          <mat-form-field>
            <mat-label>Your name</mat-label>
            <input matInput formControlName="name" autocomplete="name" />
            <mat-hint>As the record of actions will show it.</mat-hint>
            <mat-error>Give your name.</mat-error>
          </mat-form-field>
          <ts-new-password [control]="form.controls.password" />
          <ts-problems [error]="task.error()" />
          <div class="ts-actions"><button matButton="filled" type="submit" [disabled]="task.busy()">Open my account</button></div>
        </form>
      }
    </ts-doorway>
  `,
})
export class InvitationPage implements OnInit {
  private readonly element = inject<ElementRef<HTMLElement>>(ElementRef).nativeElement;
  private readonly entry = inject(Entry);
  private readonly session = inject(Session);
  private readonly router = inject(Router);

  readonly token = input.required<string>();
  protected readonly looking = new Task();
  protected readonly task = new Task();
  protected readonly email = signal<string | null>(null);
  protected readonly expires = signal<string | null>(null);
  protected readonly form = inject(NonNullableFormBuilder).group({
    name: ['', [Validators.required, Validators.pattern(/\S/)]],
    password: newPasswordControl(),
  });

  ngOnInit(): void {
    void this.looking.run(async () => {
      await this.session.load(); // brings the XSRF cookie
      const invitation = await this.entry.lookUp(this.token());
      this.form.controls.name.setValue(invitation.name);
      this.expires.set(invitation.expiresAt);
      this.email.set(invitation.email);
    });
  }

  protected submit(): void {
    if (this.form.invalid) {
      showInvalid(this.form, this.element);
      return;
    }
    void this.task.run(async () => {
      const { email } = await this.entry.accept({ token: this.token(), ...this.form.getRawValue() });
      await this.router.navigate(['/sign-in'], { queryParams: { email, welcome: '' } });
    });
  }
}
