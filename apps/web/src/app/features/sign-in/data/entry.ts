import { HttpClient } from '@angular/common/http';
import { Injectable, inject } from '@angular/core';
import type { Accepted, InvitationPreview } from '@tallystone/contracts/invitations/schema';
import type { SetUpState } from '@tallystone/contracts/set-up/schema';
import type { z } from 'zod';
import { firstValueFrom } from 'rxjs';

type Body<S extends z.ZodType> = z.infer<S>;

/** The ways to an account: the first admin's one-time token and the invited person's link. */
@Injectable({ providedIn: 'root' })
export class Entry {
  private readonly http = inject(HttpClient);

  async setUpOpen(): Promise<boolean> {
    const state = await firstValueFrom(this.http.get<Body<typeof SetUpState>>('/api/set-up'));
    return state.open;
  }

  setUp(body: { token: string; name: string; email: string; password: string }): Promise<Body<typeof Accepted>> {
    return firstValueFrom(this.http.post<Body<typeof Accepted>>('/api/set-up', body));
  }

  lookUp(token: string): Promise<Body<typeof InvitationPreview>> {
    return firstValueFrom(this.http.post<Body<typeof InvitationPreview>>('/api/invitations/look-up', { token }));
  }

  accept(body: { token: string; name: string; password: string }): Promise<Body<typeof Accepted>> {
    return firstValueFrom(this.http.post<Body<typeof Accepted>>('/api/invitations/accept', body));
  }
}
