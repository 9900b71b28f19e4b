import { HttpClient, type HttpResourceRef, httpResource } from '@angular/common/http';
import { Injectable, inject } from '@angular/core';
import type { KeptSample, KeptSamples, KeptUpload, NewErasure } from '@tallystone/contracts/samples/erasure';
import { firstValueFrom } from 'rxjs';

export type { KeptSample, KeptSamples, KeptUpload, NewErasure };

export function keptSamplesOf(modelId: () => string): HttpResourceRef<KeptSamples | undefined> {
  return httpResource<KeptSamples>(() => `/api/models/${modelId()}/kept-samples`);
}

/** Erases rows. Rejects with a Problem. */
@Injectable({ providedIn: 'root' })
export class Erasures {
  private readonly http = inject(HttpClient);

  erase(modelId: string, sampleId: string, erasure: NewErasure): Promise<unknown> {
    return firstValueFrom(this.http.post(`/api/models/${modelId}/samples/${sampleId}/erasure`, erasure));
  }
}
