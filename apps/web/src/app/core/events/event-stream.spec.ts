import { TestBed } from '@angular/core/testing';
import { EventStream, STREAM_FETCH } from './event-stream';

/** A server that answers each connection with one of these texts, then ends it. */
function server(answers: readonly (string | number)[]): { fetch: typeof fetch; asked: (string | null)[] } {
  const asked: (string | null)[] = [];
  const fetch: typeof globalThis.fetch = async (_url, init) => {
    asked.push(new Headers(init?.headers).get('Last-Event-ID'));
    const answer = answers[asked.length - 1];
    if (answer === undefined) return new Response(new ReadableStream(), { status: 200 });
    return typeof answer === 'number' ? new Response(null, { status: answer }) : new Response(answer, { status: 200 });
  };
  return { fetch, asked };
}

describe('EventStream', () => {
  beforeEach(() => vi.useFakeTimers());
  afterEach(() => vi.useRealTimers());

  it('comes back after a break and asks for what it missed', async () => {
    const { fetch, asked } = server(['retry: 2000\nid: 40\n: open\n\n', 'id: 41\nevent: run\ndata: {"n":1}\n\n', 503, 'id: 42\nevent: run\ndata: {"n":2}\n\n']);
    TestBed.configureTestingModule({ providers: [{ provide: STREAM_FETCH, useValue: fetch }] });
    const stream = TestBed.inject(EventStream);
    const heard: unknown[] = [];
    const listening = stream.of('run').subscribe((event) => heard.push(event));
    await vi.advanceTimersByTimeAsync(20_000);
    expect(heard).toEqual([{ n: 1 }, { n: 2 }]);
    expect(asked.slice(0, 5)).toEqual([null, '40', '41', '41', '42']);
    expect(stream.state()).toBe('open');
    listening.unsubscribe();
    expect(stream.state()).toBe('closed');
  });

  it('gives up when the person is signed out', async () => {
    const { fetch, asked } = server([401, 401]);
    TestBed.configureTestingModule({ providers: [{ provide: STREAM_FETCH, useValue: fetch }] });
    let failed: unknown;
    TestBed.inject(EventStream)
      .of('run')
      .subscribe({ error: (error: unknown) => (failed = error) });
    await vi.advanceTimersByTimeAsync(60_000);
    expect(asked).toHaveLength(1);
    expect(failed).toMatchObject({ status: 401 });
  });
});
