import {
  booleanAttribute,
  ChangeDetectionStrategy,
  Component,
  ElementRef,
  type OnInit,
  inject,
  input,
  signal,
} from '@angular/core';
import { NonNullableFormBuilder, ReactiveFormsModule, Validators } from '@angular/forms';
import { MatButtonModule } from '@angular/material/button';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import { Router, RouterLink } from '@angular/router';
import { Problem, asProblem } from '../../../core/http/problem';
import { Session } from '../../../core/session';
import { Task } from '../../../core/task';
import { ProblemList } from '../../../ui/problem-list';
import { Entry } from '../data/entry';
import { Doorway } from '../ui/doorway';
import { showInvalid } from '../../../ui/show-invalid';

/** Sign-in. Comes back to the page in `next`, which is an address of this application only. */
@Component({
  selector: 'ts-sign-in-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [ReactiveFormsModule, RouterLink, MatButtonModule, MatFormFieldModule, MatInputModule, Doorway, ProblemList],
  template: `
    <ts-doorway
      title="Sign in"
      [text]="
        ended() ? 'Your session has ended. Sign in again to go on where you were.' : welcome() ? 'Your account is ready.' : null
      "
    >
      <form class="ts-form" [formGroup]="form" (ngSubmit)="submit()">
        <mat-form-field>
          <mat-label>E-mail address</mat-label>
          <input matInput type="email" formControlName="email" autocomplete="username" autocapitalize="none" spellcheck="false" />
          <mat-error>Give the e-mail address of your account.</mat-error>
        </mat-form-field>
        <mat-form-field>
          <mat-label>Password</mat-label>
          <input matInput type="password" formControlName="password" autocomplete="current-password" />
          <mat-error>Give your password.</mat-error>
        </mat-form-field>
        <ts-problems [error]="task.error()" />
        <div class="ts-actions">
          <button matButton="filled" type="submit" [disabled]="task.busy()">{{ task.busy() ? 'Signing in' : 'Sign in' }}</button>
        </div>
      </form>
      @if (session.demo()) {
        <p class="ts-second">This is the demo. Its sign-ins were printed where it was started.</p>
      }
      @if (setUpOpen()) {
        <p>Nobody has an account yet. <a routerLink="/set-up">Set Tallystone up</a> with the one-time token.</p>
      }
    </ts-doorway>
  `,
})
export class SignInPage implements OnInit {
  private readonly element = inject<ElementRef<HTMLElement>>(ElementRef).nativeElement;
  private readonly router = inject(Router);
  private readonly entry = inject(Entry);
  protected readonly session = inject(Session);

  readonly next = input<string>();
  readonly ended = input(false, { transform: booleanAttribute });
  readonly welcome = input(false, { transform: booleanAttribute });
  readonly email = input<string>();

  protected readonly task = new Task();
  protected readonly setUpOpen = signal(false);
  protected readonly form = inject(NonNullableFormBuilder).group({
    email: ['', [Validators.required, Validators.email]],
    password: ['', Validators.required],
  });

  ngOnInit(): void {
    this.form.controls.email.setValue(this.email() ?? '');
    void this.begin();
  }

  protected submit(): void {
    if (this.form.invalid) {
      showInvalid(this.form, this.element);
      return;
    }
    const { email, password } = this.form.getRawValue();
    void this.task.run(async () => {
      try {
        await this.session.signIn(email, password);
      } catch (error) {
        this.form.controls.password.reset();
        const { status, code, detail, requestId } = asProblem(error);
        throw status === 401 ? new Problem(status, code, 'Not signed in', detail, [], requestId) : error;
      }
      await this.router.navigateByUrl(this.target());
    });
  }

  private async begin(): Promise<void> {
    const [view, open] = await Promise.all([
      this.session.load().catch(() => null),
      this.entry.setUpOpen().catch(() => false), // the link is a courtesy; signing in says what is wrong
    ]);
    this.setUpOpen.set(open);
    if (view?.user) await this.router.navigateByUrl(this.target());
  }

  private target(): string {
    const next = this.next();
    // "//elsewhere" and "/\elsewhere" would leave this origin.
    return next && /^\/(?![/\\])/.test(next) ? next : '/models';
  }
}
