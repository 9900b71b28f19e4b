import { ChangeDetectionStrategy, Component, computed, ElementRef, inject, signal } from '@angular/core';
import { type FormGroupDirective, NonNullableFormBuilder, ReactiveFormsModule, Validators } from '@angular/forms';
import { MatButtonModule } from '@angular/material/button';
import { MatButtonToggleModule } from '@angular/material/button-toggle';
import { MatCheckboxModule } from '@angular/material/checkbox';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import { Session } from '../../../core/session';
import { Shortcuts } from '../../../core/shortcuts';
import { Task } from '../../../core/task';
import { Theme } from '../../../core/theme';
import { NewPassword, newPasswordControl } from '../../../ui/new-password';
import { MomentPipe } from '../../../ui/number-pipes';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { browserName } from '../ui/browser-name';
import { OwnAccount, type OwnSession, ownSessions } from '../data/own-account';
import { showInvalid } from '../../../ui/show-invalid';

/** One's own account: who one is, where one is signed in, the password, light or dark. Roles are given by an admin, never by oneself. */
@Component({
  selector: 'ts-account-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [
    ReactiveFormsModule,
    MatButtonModule,
    MatButtonToggleModule,
    MatCheckboxModule,
    MatFormFieldModule,
    MatInputModule,
    MomentPipe,
    NewPassword,
    PageHeader,
    ProblemList,
  ],
  host: { class: 'ts-page' },
  templateUrl: './account-page.html',
  styles: `
    section {
      display: grid;
      gap: 14px;
      justify-items: start;
      align-content: start;
    }
    .ts-form,
    .sessions {
      width: 100%;
    }
    .sessions {
      list-style: none;
    }
    .sessions li {
      display: grid;
      grid-template-columns: minmax(0, 1fr) max-content;
      align-items: center;
      gap: 2px 16px;
      padding: 8px 0;
      border-bottom: 1px solid var(--ts-hairline);
    }
    .sessions button {
      margin-right: -12px; // its words on the margin
    }
    .ts-caption {
      display: block;
    }
  `,
})
export class AccountPage {
  private readonly element = inject<ElementRef<HTMLElement>>(ElementRef).nativeElement;
  private readonly account = inject(OwnAccount);
  protected readonly session = inject(Session);
  protected readonly theme = inject(Theme);
  protected readonly shortcuts = inject(Shortcuts);

  protected readonly person = this.session.person;
  protected readonly roles = computed(() => this.person()?.roles.join(', ') || 'no role yet');
  protected readonly sessions = ownSessions();
  protected readonly list = computed(() => (this.sessions.hasValue() ? this.sessions.value().sessions : []));
  protected readonly all = signal(false);
  /** The latest few; nobody looks for their own among many. */
  protected readonly shown = computed(() => (this.all() ? this.list() : this.list().slice(0, 6)));
  protected readonly ending = new Task();
  protected readonly changing = new Task();
  protected readonly changed = signal(false);
  protected readonly browserName = browserName;
  protected readonly form = inject(NonNullableFormBuilder).group({
    current: ['', Validators.required],
    next: newPasswordControl(),
  });

  protected end(entry: OwnSession): void {
    void this.ending.run(async () => {
      await this.account.endSession(entry.id);
      this.sessions.reload();
    });
  }

  protected change(directive: FormGroupDirective): void {
    if (this.form.invalid) {
      showInvalid(this.form, this.element);
      return;
    }
    const { current, next } = this.form.getRawValue();
    this.changed.set(false);
    void this.changing.run(async () => {
      await this.session.changePassword(current, next);
      directive.resetForm();
      this.changed.set(true);
      this.sessions.reload();
    });
  }
}
