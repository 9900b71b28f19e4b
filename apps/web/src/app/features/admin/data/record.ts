import { HttpClient, type HttpResourceRef, httpResource } from '@angular/common/http';
import { Injectable, inject } from '@angular/core';
import type {
  RecordEntry,
  RecordHead as RecordHeadSchema,
  RecordPage as RecordPageSchema,
  RecordVerification,
} from '@tallystone/contracts/record/schema';
import type { Run } from '@tallystone/contracts/runs/schema';
import type { z } from 'zod';
import { firstValueFrom } from 'rxjs';
import { idempotent, newIdempotencyKey } from '../../../core/http/etag';

export type { RecordEntry, RecordVerification };
type RecordPage = z.infer<typeof RecordPageSchema>;
type RecordHead = z.infer<typeof RecordHeadSchema>;

/** Filters as the address carries them; `before` is the sequence that the page before ended with. */
export interface RecordFilter {
  readonly action?: string;
  readonly entity?: string;
  readonly entityId?: string;
  readonly modelId?: string;
  readonly actorId?: string;
  readonly from?: string;
  readonly to?: string;
  readonly before?: string;
}

/** A day of the address ("2026-11-03") as the moment it begins or ends, in this browser's time zone. */
export function dayBound(day: string, end: boolean): string | null {
  const moment = new Date(`${day}T00:00:00`);
  if (Number.isNaN(moment.getTime())) return null;
  if (end) moment.setDate(moment.getDate() + 1);
  return moment.toISOString();
}

/** One page of the record, the latest first, read again whenever the filter changes. Call in an injection context. */
export function recordPage(filter: () => RecordFilter): HttpResourceRef<RecordPage | undefined> {
  return httpResource<RecordPage>(() => {
    const { from, to, ...plain } = filter();
    const params: Record<string, string> = {};
    for (const [key, value] of Object.entries(plain)) if (value) params[key] = value;
    const begin = from && dayBound(from, false);
    const end = to && dayBound(to, true);
    if (begin) params['from'] = begin;
    if (end) params['to'] = end;
    return { url: '/api/record', params };
  });
}

/** The last link of the chain, once it is wanted: it is told to those who may verify it. Call in an injection context. */
export function recordHead(wanted: () => boolean): HttpResourceRef<RecordHead | undefined> {
  return httpResource<RecordHead>(() => (wanted() ? '/api/record/head' : undefined));
}

@Injectable({ providedIn: 'root' })
export class RecordOfActions {
  private readonly http = inject(HttpClient);

  /** Starts a run that follows the whole chain link by link; its result is a RecordVerification. */
  verify(): Promise<Run> {
    return firstValueFrom(this.http.post<Run>('/api/record/verifications', {}, { headers: idempotent(newIdempotencyKey()) }));
  }
}
