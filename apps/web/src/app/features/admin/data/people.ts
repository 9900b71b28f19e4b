import { HttpClient, type HttpResourceRef, httpResource } from '@angular/common/http';
import { Injectable, inject } from '@angular/core';
import type {
  Invitation as InvitationSchema,
  InvitationList as InvitationListSchema,
} from '@tallystone/contracts/invitations/schema';
import type { Person, PersonList as PersonListSchema, Role } from '@tallystone/contracts/people/schema';
import type { z } from 'zod';
import { firstValueFrom } from 'rxjs';
import { saveTagged } from '../../../core/http/etag';

export type { Person, Role };
export type Invitation = z.infer<typeof InvitationSchema>;
type PersonList = z.infer<typeof PersonListSchema>;
type InvitationList = z.infer<typeof InvitationListSchema>;

/** Everyone with an account. Call in an injection context. */
export function peopleList(): HttpResourceRef<PersonList | undefined> {
  return httpResource<PersonList>(() => '/api/people');
}

/** Invitations, the latest first; not asked for by those who may not invite. Call in an injection context. */
export function invitationList(wanted: () => boolean): HttpResourceRef<InvitationList | undefined> {
  return httpResource<InvitationList>(() => (wanted() ? '/api/invitations' : undefined));
}

/** What an admin does with people. Every method rejects with a Problem. */
@Injectable({ providedIn: 'root' })
export class People {
  private readonly http = inject(HttpClient);

  invite(body: { name: string; email: string; roles: readonly Role[] }): Promise<Invitation> {
    return firstValueFrom(this.http.post<Invitation>('/api/invitations', body));
  }

  withdraw(id: string): Promise<Invitation> {
    return firstValueFrom(this.http.delete<Invitation>(`/api/invitations/${id}`));
  }

  /** Changes the roles of the person as last read: when someone else changed them since, the server answers 412. */
  async changeRoles(person: Person, roles: readonly Role[], reason: string): Promise<Person> {
    const saved = saveTagged<Person>(
      this.http,
      'PUT',
      `/api/people/${person.id}/roles`,
      { roles, reason },
      `"${person.revision}"`,
    );
    return (await firstValueFrom(saved)).value;
  }

  disable(id: string, reason: string): Promise<Person> {
    return firstValueFrom(this.http.post<Person>(`/api/people/${id}/disable`, { reason }));
  }

  enable(id: string, reason: string): Promise<Person> {
    return firstValueFrom(this.http.post<Person>(`/api/people/${id}/enable`, { reason }));
  }
}
