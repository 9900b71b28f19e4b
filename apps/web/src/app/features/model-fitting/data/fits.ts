import { HttpClient, httpResource } from '@angular/common/http';
import { Injectable, inject } from '@angular/core';
import type { BinningList, CharacteristicList } from '@tallystone/contracts/binnings/schema';
import type { Fit, FitBasis, FitList, FitPath, NewChoice, NewFit } from '@tallystone/contracts/fits/schema';
import { firstValueFrom } from 'rxjs';
import { type Tagged, idempotent, readTagged, saveTagged, tagged } from '../../../core/http/etag';

export type { Fit, FitList, FitPath, NewChoice, NewFit };

/** Reads and writes of fits. Resources are made in an injection context, one per page. */
@Injectable({ providedIn: 'root' })
export class Fits {
  private readonly http = inject(HttpClient);

  /** The fits of a model, the latest first. */
  list(modelId: () => string) {
    return httpResource<FitList>(() => `/api/models/${modelId()}/fits`);
  }

  /** The path of a fit, once there is one. */
  path(fitId: () => string | null) {
    return httpResource<FitPath>(() => {
      const id = fitId();
      return id === null ? undefined : `/api/fits/${id}/path`;
    });
  }

  /** Binnings a fit can start from. */
  binnings(modelId: () => string) {
    return httpResource<BinningList>(() => `/api/models/${modelId()}/binnings`);
  }

  /** The characteristics of a binning, as the fit would take them. */
  characteristics(binningId: () => string | null) {
    return httpResource<CharacteristicList>(() => {
      const id = binningId();
      return id === null ? undefined : `/api/binnings/${id}/characteristics`;
    });
  }

  /** What a fit on the sample of a binning can draw on; nothing is asked while there is none. */
  basis(definitionId: () => string | null) {
    return httpResource<FitBasis>(() => {
      const id = definitionId();
      return id === null ? undefined : `/api/sample-definitions/${id}/fit-basis`;
    });
  }

  read(fitId: string): Promise<Tagged<Fit>> {
    return firstValueFrom(readTagged<Fit>(this.http, `/api/fits/${fitId}`));
  }

  /** The same key sent twice starts one fit. */
  async start(modelId: string, fit: NewFit, key: string): Promise<Fit> {
    const url = `/api/models/${modelId}/fits`;
    const response = await firstValueFrom(this.http.post<Fit>(url, fit, { headers: idempotent(key), observe: 'response' }));
    return tagged(response).value;
  }

  choose(fitId: string, choice: NewChoice, etag: string): Promise<Tagged<Fit>> {
    return firstValueFrom(saveTagged<Fit>(this.http, 'PUT', `/api/fits/${fitId}/choice`, choice, etag));
  }

  /** Opening is recorded with its reason and printed in the documentation. */
  async openOutOfTime(definitionId: string, reason: string): Promise<void> {
    await firstValueFrom(this.http.post(`/api/sample-definitions/${definitionId}/out-of-time`, { reason }));
  }
}
