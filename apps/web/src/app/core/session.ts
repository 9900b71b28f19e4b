import { HttpClient } from '@angular/common/http';
import { Injectable, computed, inject, signal } from '@angular/core';
import { Router } from '@angular/router';
import type { Session as SessionView } from '@tallystone/contracts/session/schema';
import { firstValueFrom } from 'rxjs';

export type { SessionView };
export type SignedInPerson = NonNullable<SessionView['user']>;

/**
 * Who is here and what they may do. Pages ask for abilities (`can('models.create')`), never for roles. The session itself lives in an
 * HttpOnly cookie; nothing of it is kept by this page.
 */
@Injectable({ providedIn: 'root' })
export class Session {
  private readonly http = inject(HttpClient);
  private readonly router = inject(Router);
  private readonly view = signal<SessionView | null>(null);
  private loading: Promise<SessionView> | null = null;

  readonly person = computed(() => this.view()?.user ?? null);
  readonly demo = computed(() => this.view()?.demo ?? false);
  private readonly abilities = computed<ReadonlySet<string>>(() => new Set(this.view()?.abilities ?? []));

  can(ability: string): boolean {
    return this.abilities().has(ability);
  }

  /** The session as the server sees it; asked once and then kept until something changes it. */
  async load(): Promise<SessionView> {
    const known = this.view();
    if (known) return known;
    this.loading ??= this.refresh().finally(() => (this.loading = null));
    return this.loading;
  }

  async refresh(): Promise<SessionView> {
    return this.take(await firstValueFrom(this.http.get<SessionView>('/api/session')));
  }

  /** Rejects with a Problem: 401 for a wrong e-mail or password, 429 with a waiting time after many failures. */
  async signIn(email: string, password: string): Promise<void> {
    await this.load(); // its answer brings the XSRF cookie that the next request needs
    this.take(await firstValueFrom(this.http.post<SessionView>('/api/session', { email, password })));
  }

  /** Ends every other session of this person too; this one goes on under a new name. */
  async changePassword(current: string, next: string): Promise<void> {
    this.take(await firstValueFrom(this.http.put<SessionView>('/api/session/password', { current, next })));
  }

  async signOut(): Promise<void> {
    this.take(await firstValueFrom(this.http.delete<SessionView>('/api/session')));
    await this.router.navigateByUrl('/sign-in');
  }

  /** Called when the server says the session is over: remember the page, go to sign-in. */
  ended(): void {
    const view = this.view();
    if (view === null || view.user === null) return;
    this.view.set({ ...view, user: null, abilities: [] });
    const url = this.router.url;
    void this.router.navigate(['/sign-in'], { queryParams: { next: url === '/' ? null : url, ended: '' } });
  }

  private take(view: SessionView): SessionView {
    this.view.set(view);
    return view;
  }
}
