import { provideHttpClient } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { TestBed } from '@angular/core/testing';
import { provideRouter } from '@angular/router';
import { Session } from '../session';
import { EventStream, STREAM_FETCH } from './event-stream';
import { type Run, Runs } from './runs';

const run = (change: Partial<Run> = {}): Run => ({
  id: 'r1',
  kind: 'fit.path',
  state: 'running',
  phase: 'folds',
  share: 0.2,
  attempt: 1,
  modelId: 'm1',
  entity: 'fit',
  entityId: 'f1',
  startedBy: 'Modeller',
  createdAt: '2026-11-03T13:00:00Z',
  startedAt: '2026-11-03T13:00:01Z',
  endedAt: null,
  result: null,
  problem: null,
  abilities: ['cancel'],
  ...change,
});

describe('Runs', () => {
  let server: HttpTestingController;
  let send: (text: string) => void;

  async function begin(streaming: boolean, active: readonly Run[]): Promise<Runs> {
    let controller: ReadableStreamDefaultController<Uint8Array> | undefined;
    const body = new ReadableStream<Uint8Array>({ start: (given) => (controller = given) });
    send = (text) => controller?.enqueue(new TextEncoder().encode(text));
    TestBed.configureTestingModule({
      providers: [
        provideHttpClient(),
        provideHttpClientTesting(),
        provideRouter([]),
        { provide: STREAM_FETCH, useValue: async () => (streaming ? new Response(body) : new Response(null, { status: 503 })) },
      ],
    });
    server = TestBed.inject(HttpTestingController);
    const loading = TestBed.inject(Session).load();
    server.expectOne('/api/session').flush({
      user: { id: 'a', name: 'Modeller', email: 'modeller@saltmarsh.example', roles: ['modeller'] },
      abilities: [],
      demo: false,
    });
    await loading;
    const runs = TestBed.inject(Runs);
    TestBed.tick();
    server.expectOne('/api/runs?active=true').flush({ runs: active });
    await settle();
    return runs;
  }

  const settle = (): Promise<unknown> => vi.advanceTimersByTimeAsync(5);

  beforeEach(() => vi.useFakeTimers());
  afterEach(() => {
    TestBed.resetTestingModule();
    vi.useRealTimers();
  });

  it('follow progress and tell the end once, with the result', async () => {
    const runs = await begin(true, [run()]);
    const ended: Run[] = [];
    runs.finished.subscribe((entry) => ended.push(entry));
    const live = runs.run(() => 'r1');
    expect(live()?.share).toBe(0.2);
    const event = {
      runId: 'r1',
      kind: 'fit.path',
      attempt: 1,
      modelId: 'm1',
      entity: 'fit',
      entityId: 'f1',
      problem: null,
      at: '',
    };
    send(`id: 1\nevent: run\ndata: ${JSON.stringify({ ...event, state: 'running', phase: 'path', share: 0.6 })}\n\n`);
    await settle();
    expect(live()).toMatchObject({ phase: 'path', share: 0.6, startedBy: 'Modeller' });
    send(`id: 2\nevent: run\ndata: ${JSON.stringify({ ...event, state: 'succeeded', phase: null, share: 1 })}\n\n`);
    await settle();
    server.expectOne('/api/runs/r1').flush(run({ state: 'succeeded', share: 1, result: { kept: 8 } }));
    await settle();
    expect(ended.map((entry) => entry.result)).toEqual([{ kept: 8 }]);
    expect(runs.active()).toEqual([]);
    expect(TestBed.inject(EventStream).state()).toBe('open');
    await vi.advanceTimersByTimeAsync(10_000);
    server.expectNone('/api/runs?active=true');
  });

  it('poll while the stream is broken, and ask how a run ended that is no longer listed', async () => {
    const runs = await begin(false, [run()]);
    const ended: Run[] = [];
    runs.finished.subscribe((entry) => ended.push(entry));
    await vi.advanceTimersByTimeAsync(3000);
    server.expectOne('/api/runs?active=true').flush({ runs: [] });
    await settle();
    server
      .expectOne('/api/runs/r1')
      .flush(run({ state: 'failed', problem: { code: 'memory', message: 'Out of memory', where: {} } }));
    await settle();
    expect(ended.map((entry) => entry.problem?.code)).toEqual(['memory']);
  });

  it('estimate the time left from the pace seen here', async () => {
    const runs = await begin(true, [run({ share: 0.2 })]);
    expect(runs.secondsLeft(run({ share: 0.2 }))).toBeNull();
    await vi.advanceTimersByTimeAsync(10_000);
    expect(runs.secondsLeft(run({ share: 0.6 }))).toBeCloseTo(10, 0);
    expect(runs.secondsLeft(run({ share: 0.6, attempt: 2 }))).toBeNull();
  });

  it('cancel a run', async () => {
    const runs = await begin(true, [run()]);
    const cancelling = runs.cancel('r1');
    server.expectOne({ method: 'POST', url: '/api/runs/r1/cancel' }).flush(run({ state: 'cancelling' }));
    await cancelling;
    expect(runs.run(() => 'r1')()?.state).toBe('cancelling');
  });
});
