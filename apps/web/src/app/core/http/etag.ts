import { type HttpClient, HttpHeaders, type HttpResponse } from '@angular/common/http';
import { type Observable, map } from 'rxjs';
import { Problem } from './problem';

/** Something people edit, with the tag of the state that was read; the tag goes back as If-Match when it is saved. */
export interface Tagged<T> {
  readonly value: T;
  readonly etag: string;
}

/** The body and ETag of an answer observed as a whole response. */
export function tagged<T>(response: HttpResponse<T>): Tagged<T> {
  const etag = response.headers.get('ETag');
  if (etag === null) throw new Error(`${response.url ?? 'The answer'} carries no ETag`);
  return { value: response.body as T, etag };
}

/** GETs what people edit together with its tag. */
export function readTagged<T>(http: HttpClient, url: string): Observable<Tagged<T>> {
  return http.get<T>(url, { observe: 'response' }).pipe(map(tagged));
}

/** Headers that make a write conditional: 412 when someone else saved first, 428 when the header is missing. */
export function ifMatch(etag: string, headers: HttpHeaders = new HttpHeaders()): HttpHeaders {
  return headers.set('If-Match', etag);
}

/**
 * Saves what was read and returns it with its new tag.
 *
 * @example saveTagged(http, 'PATCH', `/api/binnings/${id}`, edits, binning.etag).subscribe({ error: (e) => isStale(e) && ... })
 */
export function saveTagged<T>(
  http: HttpClient,
  method: 'PUT' | 'PATCH' | 'POST',
  url: string,
  body: unknown,
  etag: string,
): Observable<Tagged<T>> {
  return http.request<T>(method, url, { body, headers: ifMatch(etag), observe: 'response' }).pipe(map(tagged));
}

/** True when someone else saved first (412): show "theirs / mine", never overwrite. */
export function isStale(error: unknown): error is Problem {
  return error instanceof Problem && error.status === 412;
}

/** Headers for what starts work: pressing twice, or sending again after a lost answer, starts one run. One key per intention. */
export function idempotent(key: string, headers: HttpHeaders = new HttpHeaders()): HttpHeaders {
  return headers.set('Idempotency-Key', key);
}

/** A fresh key: make it when the person decides, keep it while the same request is retried. */
export function newIdempotencyKey(): string {
  return crypto.randomUUID();
}
