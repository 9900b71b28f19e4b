import { ChangeDetectionStrategy, Component, Injector, computed, inject } from '@angular/core';
import { MatButtonModule } from '@angular/material/button';
import { MatDialog } from '@angular/material/dialog';
import { firstValueFrom } from 'rxjs';
import { Session } from '../../../core/session';
import { Task } from '../../../core/task';
import { Ask } from '../../../ui/ask';
import { type Column } from '../../../ui/column';
import { CellTemplate, DenseTable } from '../../../ui/dense-table';
import { plural } from '../../../ui/numbers';
import { PageHeader } from '../../../ui/page-header';
import { ProblemList } from '../../../ui/problem-list';
import { SortInAddress } from '../../../ui/sort-in-address';
import { StatusMark, type StatusTone } from '../../../ui/status-mark';
import { type Invitation, People, type Person, invitationList, peopleList } from '../data/people';
import { InviteDialog, type InviteQuestion } from '../ui/invite-dialog';
import { rolesText } from '../ui/roles';
import { RolesDialog, type RolesQuestion } from '../ui/roles-dialog';

const personColumns: readonly Column<Person>[] = [
  { key: 'name', label: 'Name', value: (row) => row.name, sortable: true },
  { key: 'email', label: 'E-mail address', value: (row) => row.email, sortable: true },
  { key: 'roles', label: 'Roles', value: (row) => rolesText(row.roles), sortable: true },
  { key: 'state', label: 'State', value: (row) => row.state, sortable: true },
  { key: 'lastSignIn', label: 'Last sign-in', kind: 'moment', value: (row) => row.lastSignInAt, sortable: true },
];

const invitationColumns: readonly Column<Invitation>[] = [
  { key: 'name', label: 'Name', value: (row) => row.name },
  { key: 'email', label: 'E-mail address', value: (row) => row.email },
  { key: 'roles', label: 'Roles', value: (row) => rolesText(row.roles) },
  { key: 'state', label: 'State', value: (row) => row.state },
  { key: 'mail', label: 'Mail', value: (row) => row.mail },
  { key: 'by', label: 'Invited by', value: (row) => row.invitedBy },
  { key: 'expires', label: 'Open until', kind: 'moment', value: (row) => row.expiresAt },
];

const actionColumn = { key: 'acts', label: 'Change', value: () => '' };

const invitationTones: Readonly<Record<Invitation['state'], StatusTone>> = {
  open: 'under-way',
  accepted: 'kept',
  withdrawn: 'ended',
  expired: 'ended',
};

/** Who has an account, in which roles; invitations still under way. What may be done with each person comes from the server. */
@Component({
  selector: 'ts-people-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [SortInAddress, MatButtonModule, CellTemplate, DenseTable, PageHeader, ProblemList, StatusMark],
  host: { class: 'ts-page' },
  template: `
    <div class="ts-stack">
      <ts-page-header title="People" [finding]="finding()">
        @if (mayInvite()) {
          <button matButton="filled" type="button" (click)="invite()">Invite a person</button>
        }
      </ts-page-header>
      <ts-problems [error]="people.error() ?? task.error()" />
      @if (list(); as list) {
        <ts-table tsSortInAddress caption="People" [columns]="columns()" [rows]="list" [identify]="byId" [quiet]="isDisabled">
          <ng-template tsCell="state" [tsCellRows]="list" let-row>
            <ts-status [tone]="row.state === 'active' ? 'kept' : 'ended'">{{ row.state }}</ts-status>
          </ng-template>
          <ng-template tsCell="acts" [tsCellRows]="list" let-row>
            <span class="acts">
              @if (row.abilities.includes('change-roles')) {
                <button matButton type="button" [attr.aria-label]="'Roles of ' + row.name" (click)="roles(row)">Roles</button>
              }
              @if (row.abilities.includes('disable')) {
                <button matButton type="button" [attr.aria-label]="'Disable ' + row.name" (click)="disable(row)">Disable</button>
              }
              @if (row.abilities.includes('enable')) {
                <button matButton type="button" [attr.aria-label]="'Enable ' + row.name" (click)="enable(row)">Enable</button>
              }
            </span>
          </ng-template>
        </ts-table>
      }
      @if (openInvitations().length > 0) {
        <div>
          <h2>Invitations</h2>
          <ts-table
            caption="Invitations"
            [columns]="invitationColumns"
            [rows]="openInvitations()"
            [identify]="byInvitation"
            [copyable]="false"
          >
            <ng-template tsCell="state" [tsCellRows]="openInvitations()" let-row>
              <ts-status [tone]="tones[row.state]">{{ row.state }}</ts-status>
            </ng-template>
            <ng-template tsCell="acts" [tsCellRows]="openInvitations()" let-row>
              @if (row.state === 'open') {
                <span class="acts">
                  <button
                    matButton
                    type="button"
                    [attr.aria-label]="'Withdraw the invitation of ' + row.name"
                    (click)="withdraw(row)"
                  >
                    Withdraw
                  </button>
                </span>
              }
            </ng-template>
          </ts-table>
        </div>
      }
    </div>
  `,
  styles: `
    .acts {
      display: flex;
      margin: -7px 0 -7px -12px;
    }
  `,
})
export class PeoplePage {
  private readonly session = inject(Session);
  private readonly service = inject(People);
  private readonly ask = inject(Ask);
  private readonly dialog = inject(MatDialog);
  private readonly injector = inject(Injector);

  protected readonly task = new Task();
  protected readonly mayInvite = computed(() => this.session.can('people.invite'));
  protected readonly mayManage = computed(() => this.session.can('people.manage'));
  protected readonly people = peopleList();
  protected readonly invitations = invitationList(this.mayInvite);
  protected readonly list = computed(() => (this.people.hasValue() ? this.people.value().people : null));
  protected readonly openInvitations = computed(() =>
    this.invitations.hasValue() ? this.invitations.value().invitations.filter((entry) => entry.state !== 'accepted') : [],
  );
  protected readonly columns = computed(() => (this.mayManage() ? [...personColumns, actionColumn] : personColumns));
  protected readonly invitationColumns = [...invitationColumns, actionColumn];
  protected readonly tones = invitationTones;
  protected readonly finding = computed(() => {
    const list = this.list();
    if (!list) return null;
    const disabled = list.filter((person) => person.state === 'disabled').length;
    const waiting = this.openInvitations().filter((entry) => entry.state === 'open').length;
    const parts = [plural(list.length, 'person has an account', 'people have an account')];
    if (disabled > 0) parts.push(`${disabled} of them disabled`);
    if (waiting > 0) parts.push(`${plural(waiting, 'invitation')} still open`);
    return `${parts.join(', ')}.`;
  });

  protected readonly byId = (row: Person): string => row.id;
  protected readonly byInvitation = (row: Invitation): string => row.id;
  protected readonly isDisabled = (row: Person): boolean => row.state === 'disabled';

  protected invite(): void {
    const data: InviteQuestion = { send: (body) => this.service.invite(body) };
    void this.open(InviteDialog, data, () => this.invitations.reload());
  }

  protected roles(person: Person): void {
    const data: RolesQuestion = {
      name: person.name,
      roles: person.roles,
      save: (roles, reason) => this.service.changeRoles(person, roles, reason),
    };
    void this.open(RolesDialog, data, () => this.people.reload());
  }

  protected async disable(person: Person): Promise<void> {
    const answer = await this.ask.for({
      title: `Disable ${person.name}?`,
      text: 'Their sessions end at once and they cannot sign in. What they did stays in the record.',
      accept: 'Disable',
      grave: true,
      reason: { label: 'Why', required: true },
    });
    if (answer) await this.task.run(() => this.service.disable(person.id, answer.reason));
    this.people.reload();
  }

  protected async enable(person: Person): Promise<void> {
    const answer = await this.ask.for({
      title: `Let ${person.name} sign in again?`,
      accept: 'Enable',
      reason: { label: 'Why', required: true },
    });
    if (answer) await this.task.run(() => this.service.enable(person.id, answer.reason));
    this.people.reload();
  }

  protected async withdraw(invitation: Invitation): Promise<void> {
    const answer = await this.ask.for({
      title: `Withdraw the invitation of ${invitation.name}?`,
      text: 'The link that was sent stops working.',
      accept: 'Withdraw',
    });
    if (answer) await this.task.run(() => this.service.withdraw(invitation.id));
    this.invitations.reload();
  }

  private async open<C, D>(component: new () => C, data: D, done: () => void): Promise<void> {
    const reference = this.dialog.open<C, D, boolean>(component, { data, width: '560px', injector: this.injector });
    if (await firstValueFrom(reference.afterClosed())) done();
  }
}
