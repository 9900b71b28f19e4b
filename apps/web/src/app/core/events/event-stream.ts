import { Injectable, InjectionToken, inject, signal } from '@angular/core';
import { Observable, defer, filter, map, retry, share, timer } from 'rxjs';
import { EventParser, type StreamMessage } from './event-parser';

/** How the stream is read; a browser's fetch, or a test's. */
export const STREAM_FETCH = new InjectionToken<typeof fetch>('how the event stream is fetched', {
  providedIn: 'root',
  factory: () => globalThis.fetch.bind(globalThis),
});

export type StreamState = 'closed' | 'connecting' | 'open' | 'waiting';

/** The stream stops for good on these: signed out or not allowed. */
const final = new Set([401, 403, 404]);

class StreamRefused extends Error {
  constructor(readonly status: number) {
    super(`The event stream answered with status ${status}`);
  }
}

/**
 * The one stream of server-sent events of this person (GET /api/events). Read with fetch instead of EventSource, because only fetch can
 * send Last-Event-ID after a refused or broken connection, so that nothing is missed in between. Cold and shared: connected while
 * someone listens. `state` is `waiting` between attempts; the runs store then polls.
 */
@Injectable({ providedIn: 'root' })
export class EventStream {
  private readonly fetch = inject(STREAM_FETCH);
  private lastEventId: string | null = null;
  private readonly current = signal<StreamState>('closed');
  readonly state = this.current.asReadonly();

  readonly messages: Observable<StreamMessage> = defer(() => this.connect()).pipe(
    retry({
      delay: (error: unknown, attempt) => {
        if (error instanceof StreamRefused && final.has(error.status)) throw error;
        this.current.set('waiting');
        return timer(Math.min(30_000, 500 * 2 ** Math.min(attempt - 1, 6)));
      },
      resetOnSuccess: true,
    }),
    share({ resetOnRefCountZero: true }),
  );

  /** Messages of one event name, parsed from JSON. */
  of<T>(event: string): Observable<T> {
    return this.messages.pipe(
      filter((message) => message.event === event),
      map((message) => JSON.parse(message.data) as T),
    );
  }

  private connect(): Observable<StreamMessage> {
    return new Observable((subscriber) => {
      const abort = new AbortController();
      this.current.set('connecting');
      void this.read(abort.signal, (message) => subscriber.next(message)).then(
        // A stream that ends is as good as broken: the server restarted or a proxy closed it.
        () => subscriber.error(new Error('The event stream ended')),
        (error: unknown) => subscriber.error(error),
      );
      return () => {
        abort.abort();
        this.current.set('closed');
      };
    });
  }

  private async read(signal: AbortSignal, deliver: (message: StreamMessage) => void): Promise<void> {
    const headers: Record<string, string> = { Accept: 'text/event-stream' };
    if (this.lastEventId !== null) headers['Last-Event-ID'] = this.lastEventId;
    const response = await this.fetch('/api/events', { headers, signal, credentials: 'same-origin', cache: 'no-store' });
    if (!response.ok || !response.body) throw new StreamRefused(response.status);
    this.current.set('open');
    const parser = new EventParser();
    const reader = response.body.pipeThrough(new TextDecoderStream()).getReader();
    for (;;) {
      const { done, value } = await reader.read();
      if (done) return;
      const messages = parser.push(value);
      this.lastEventId = parser.lastEventId ?? this.lastEventId;
      for (const message of messages) deliver(message);
    }
  }
}
