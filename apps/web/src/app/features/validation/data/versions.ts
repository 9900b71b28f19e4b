import { HttpClient, httpResource } from '@angular/common/http';
import { Injectable, inject } from '@angular/core';
import type { Fit } from '@tallystone/contracts/fits/schema';
import type { OutOfTimeCover } from '@tallystone/contracts/out-of-time/schema';
import type { EvidenceSummary, ReplicationMethod, ValidationWork } from '@tallystone/contracts/validation/schema';
import type { NewAct, ReviewList, TextsState, Version, VersionList, VersionTexts } from '@tallystone/contracts/versions/schema';
import { firstValueFrom } from 'rxjs';
import { type Run } from '../../../core/events/runs';
import { type Tagged, idempotent, readTagged, saveTagged } from '../../../core/http/etag';

type EvidenceList = { readonly evidence: readonly EvidenceSummary[] };

/** Reads and writes of versions and of what is found about them. Resources are made in an injection context, one per page. */
@Injectable({ providedIn: 'root' })
export class Versions {
  private readonly http = inject(HttpClient);

  list(modelId: () => string) {
    return httpResource<VersionList>(() => `/api/models/${modelId()}/versions`);
  }

  reviews() {
    return httpResource<ReviewList>(() => '/api/reviews');
  }

  one(versionId: () => string) {
    return httpResource<Version>(() => `/api/versions/${versionId()}`);
  }

  validation(versionId: () => string) {
    return httpResource<ValidationWork>(() => `/api/versions/${versionId()}/validation`);
  }

  evidence(versionId: () => string) {
    return httpResource<EvidenceList>(() => `/api/versions/${versionId()}/evidence`);
  }

  /** Whether the out-of-time figures of the version's sample are covered. */
  fit(fitId: () => string | null) {
    return httpResource<Fit>(() => (fitId() === null ? undefined : `/api/fits/${fitId()}`));
  }

  cover(definitionId: () => string | null) {
    return httpResource<OutOfTimeCover>(() => (definitionId() === null ? undefined : `/api/sample-definitions/${definitionId()}/out-of-time`));
  }

  act(versionId: string, act: NewAct): Promise<Version> {
    return firstValueFrom(this.http.post<Version>(`/api/versions/${versionId}/acts`, act));
  }

  readTexts(versionId: string): Promise<Tagged<TextsState>> {
    return firstValueFrom(readTagged<TextsState>(this.http, `/api/versions/${versionId}/texts`));
  }

  saveTexts(versionId: string, texts: VersionTexts, etag: string): Promise<Tagged<TextsState>> {
    return firstValueFrom(saveTagged<TextsState>(this.http, 'PUT', `/api/versions/${versionId}/texts`, texts, etag));
  }

  replicate(versionId: string, method: ReplicationMethod, key: string): Promise<Run> {
    return this.start(`/api/versions/${versionId}/replications`, { method }, key);
  }

  studyStability(versionId: string, resamples: number, seed: number, key: string): Promise<Run> {
    return this.start(`/api/versions/${versionId}/stability`, { resamples, seed }, key);
  }

  private async start(url: string, body: object, key: string): Promise<Run> {
    const { runId } = await firstValueFrom(this.http.post<{ runId: string }>(url, body, { headers: idempotent(key) }));
    return firstValueFrom(this.http.get<Run>(`/api/runs/${runId}`));
  }
}
