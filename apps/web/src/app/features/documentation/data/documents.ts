import { HttpClient, httpResource } from '@angular/common/http';
import { Injectable, inject } from '@angular/core';
import type { DocumentList } from '@tallystone/contracts/documents/schema';
import type { Version, VersionList } from '@tallystone/contracts/versions/schema';
import { firstValueFrom } from 'rxjs';
import { type Run } from '../../../core/events/runs';
import { idempotent } from '../../../core/http/etag';

/** Reads documents and has them made. */
@Injectable({ providedIn: 'root' })
export class Documents {
  private readonly http = inject(HttpClient);

  all() {
    return httpResource<DocumentList>(() => '/api/documents');
  }

  ofVersion(versionId: () => string | null) {
    return httpResource<DocumentList>(() => (versionId() === null ? undefined : `/api/versions/${versionId()}/documents`));
  }

  versions(modelId: () => string) {
    return httpResource<VersionList>(() => `/api/models/${modelId()}/versions`);
  }

  version(versionId: () => string) {
    return httpResource<Version>(() => `/api/versions/${versionId()}`);
  }

  /** The run that makes it; the same key sent twice makes one. */
  async make(versionId: string, key: string): Promise<Run> {
    const started = this.http.post<{ runId: string }>(`/api/versions/${versionId}/documents`, {}, { headers: idempotent(key) });
    const { runId } = await firstValueFrom(started);
    return firstValueFrom(this.http.get<Run>(`/api/runs/${runId}`));
  }
}
