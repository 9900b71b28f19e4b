import { HttpClient, type HttpResourceRef, httpResource } from '@angular/common/http';
import { Injectable, inject } from '@angular/core';
import type { OwnSession as OwnSessionSchema, OwnSessions as OwnSessionsSchema } from '@tallystone/contracts/session/schema';
import type { z } from 'zod';
import { firstValueFrom } from 'rxjs';

export type OwnSession = z.infer<typeof OwnSessionSchema>;

/** Where this person is signed in. Call in an injection context. */
export function ownSessions(): HttpResourceRef<z.infer<typeof OwnSessionsSchema> | undefined> {
  return httpResource(() => '/api/sessions');
}

@Injectable({ providedIn: 'root' })
export class OwnAccount {
  private readonly http = inject(HttpClient);

  endSession(id: string): Promise<void> {
    return firstValueFrom(this.http.delete<void>(`/api/sessions/${id}`), { defaultValue: undefined });
  }
}
