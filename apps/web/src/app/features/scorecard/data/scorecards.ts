import { HttpClient, httpResource } from '@angular/common/http';
import { Injectable, inject } from '@angular/core';
import type { FitList } from '@tallystone/contracts/fits/schema';
import type { Scorecard, ScorecardSettings, ScoredApplicant } from '@tallystone/contracts/scorecards/schema';
import { firstValueFrom } from 'rxjs';
import { type Run } from '../../../core/events/runs';
import { type Tagged, idempotent, readTagged, saveTagged } from '../../../core/http/etag';

/** Reads and writes of scorecards. */
@Injectable({ providedIn: 'root' })
export class Scorecards {
  private readonly http = inject(HttpClient);

  fits(modelId: () => string) {
    return httpResource<FitList>(() => `/api/models/${modelId()}/fits`);
  }

  read(fitId: string): Promise<Tagged<Scorecard>> {
    return firstValueFrom(readTagged<Scorecard>(this.http, `/api/fits/${fitId}/scorecard`));
  }

  save(fitId: string, settings: ScorecardSettings, etag: string): Promise<Tagged<Scorecard>> {
    return firstValueFrom(saveTagged<Scorecard>(this.http, 'PUT', `/api/fits/${fitId}/scorecard`, settings, etag));
  }

  /** Nothing of the applicant is kept. */
  score(fitId: string, fields: Record<string, string>): Promise<ScoredApplicant> {
    return firstValueFrom(this.http.post<ScoredApplicant>(`/api/fits/${fitId}/scorecard/applicants`, { fields }));
  }

  /** The run that freezes; the same key sent twice freezes once. */
  async freeze(modelId: string, fitId: string, note: string, key: string): Promise<Run> {
    const started = this.http.post<{ runId: string }>(`/api/models/${modelId}/versions`, { fitId, note }, { headers: idempotent(key) });
    const { runId } = await firstValueFrom(started);
    return firstValueFrom(this.http.get<Run>(`/api/runs/${runId}`));
  }
}
