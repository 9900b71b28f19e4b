import { HttpClient, type HttpResourceRef, httpResource } from '@angular/common/http';
import { Injectable, inject } from '@angular/core';
import type { MemberCandidates, Model, ModelEdit, ModelFields, ModelList } from '@tallystone/contracts/models/schema';
import { firstValueFrom } from 'rxjs';
import { type Tagged, readTagged, saveTagged } from '../../../core/http/etag';

export type { Model, ModelFields };
export type ModelSummary = ModelList['models'][number];

export interface InventoryQuery {
  readonly search: string;
  readonly state: string;
}

/** The models this person may see, read again whenever the query changes. Call in an injection context. */
export function inventory(query: () => InventoryQuery): HttpResourceRef<ModelList | undefined> {
  return httpResource<ModelList>(() => {
    const { search, state } = query();
    return { url: '/api/models', params: { ...(search && { search }), ...(state && { state }) } };
  });
}

/** Reads and changes what is written about models. Every method rejects with a Problem. */
@Injectable({ providedIn: 'root' })
export class Models {
  private readonly http = inject(HttpClient);

  create(fields: ModelFields): Promise<Model> {
    return firstValueFrom(this.http.post<Model>('/api/models', fields));
  }

  read(id: string): Promise<Tagged<Model>> {
    return firstValueFrom(readTagged<Model>(this.http, `/api/models/${id}`));
  }

  edit(id: string, edit: ModelEdit, etag: string): Promise<Tagged<Model>> {
    return firstValueFrom(saveTagged<Model>(this.http, 'PATCH', `/api/models/${id}`, edit, etag));
  }

  async candidates(id: string): Promise<MemberCandidates['people']> {
    return (await firstValueFrom(this.http.get<MemberCandidates>(`/api/models/${id}/member-candidates`))).people;
  }

  addMember(id: string, personId: string): Promise<Model> {
    return firstValueFrom(this.http.post<Model>(`/api/models/${id}/members`, { personId }));
  }

  removeMember(id: string, personId: string): Promise<Model> {
    return firstValueFrom(this.http.delete<Model>(`/api/models/${id}/members/${personId}`));
  }
}
