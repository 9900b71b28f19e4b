import { provideHttpClient, withInterceptors } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { TestBed } from '@angular/core/testing';
import { addCut, mergeNumeric, moveCut, type NumericBins } from '@tallystone/numeric/bench';
import { problemInterceptor } from '../../../core/http/interceptors';
import { utilisation } from '../testing/characteristics';
import { Bench } from './bench';

const url = `/api/binnings/b/characteristics/${utilisation.id}`;

describe('the bench of one characteristic', () => {
  let bench: Bench;
  let http: HttpTestingController;

  const settled = () => new Promise((resolve) => setTimeout(resolve));
  const tag = (revision: number) => ({ headers: { ETag: `"${revision}"` } });
  const load = async () => {
    const loading = bench.load('b', utilisation.id);
    await settled();
    http.expectOne(url).flush(utilisation, tag(3));
    await loading;
  };
  const bins = () => bench.bins() as NumericBins;

  beforeEach(async () => {
    TestBed.configureTestingModule({
      providers: [Bench, provideHttpClient(withInterceptors([problemInterceptor])), provideHttpClientTesting()],
    });
    bench = TestBed.inject(Bench);
    http = TestBed.inject(HttpTestingController);
    await load();
  });
  afterEach(() => http.verify());

  it('recalculates at once and saves with the tag that was read', async () => {
    const before = bench.reading()?.informationValue;
    expect(bench.do(addCut(utilisation.fine, bins(), 60))).toBe(true);
    expect(bench.reading()?.bins).toHaveLength(6);
    expect(bench.reading()?.informationValue).not.toBe(before);
    expect([bench.state(), bench.unsaved(), bench.unexplained()]).toEqual(['waiting', true, 1]);
    const flushed = bench.flush();
    await settled();
    const request = http.expectOne({ method: 'PUT', url });
    expect(request.request.headers.get('If-Match')).toBe('"3"');
    expect(request.request.body).toMatchObject({
      bins: { edges: [20, 40, 60] },
      edits: [{ kind: 'cut added', before: utilisation.current }],
    });
    request.flush({ ...utilisation, current: bins(), revision: 4 }, tag(4));
    await flushed;
    expect([bench.state(), bench.unsaved()]).toEqual(['saved', false]);
  });

  it('edits the bins as they are, and has no edit that changes nothing', async () => {
    const right = () => bench.edit((fine, now) => (now.kind === 'numeric' ? moveCut(fine, now, 0, 30) : null));
    expect([right(), right()]).toEqual([true, false]);
    expect(bench.do({ kind: 'cut moved', what: 'Cut moved from 20 to 30', bins: bins() })).toBe(false);
    expect(bench.edit((fine, now) => (now.kind === 'numeric' ? moveCut(fine, now, 0, 20) : null))).toBe(true);
    // Back where it came from in one gesture.
    expect(bench.history()?.edits).toEqual([]);
    bench.undo();
    expect(bins().edges).toEqual([20, 40]);
    const flushed = bench.flush();
    await settled();
    http.expectOne({ method: 'PUT', url }).flush({ ...utilisation, revision: 4 }, tag(4));
    await flushed;
  });

  it('shows a drag without an edit', () => {
    bench.preview({ ...bins(), edges: [30, 40] });
    expect(bins().edges).toEqual([30, 40]);
    expect(bench.unsaved()).toBe(false);
    bench.preview(null);
    expect(bins().edges).toEqual([20, 40]);
  });

  it('undoes, redoes and resets', () => {
    bench.do(addCut(utilisation.fine, bins(), 60));
    bench.do(mergeNumeric(utilisation.fine, bins(), 0));
    bench.undo();
    expect(bins().edges).toEqual([20, 40, 60]);
    bench.redo();
    expect(bins().edges).toEqual([40, 60]);
    bench.reset();
    expect(bins().edges).toEqual([20, 40]);
  });

  it('meets whoever saved first, and keeps mine over theirs with the edits that made them', async () => {
    bench.do(addCut(utilisation.fine, bins(), 60));
    const flushed = bench.flush();
    await settled();
    http
      .expectOne({ method: 'PUT', url })
      .flush({ code: 'stale', title: 'Changed meanwhile', status: 412 }, { status: 412, statusText: 'Stale' });
    await settled();
    const theirs = { kind: 'numeric', edges: [20, 40, 80], special: ['own'], missing: 'own' };
    const edit = {
      id: 'theirs',
      kind: 'cut added',
      what: 'Cut added at 80',
      before: utilisation.current,
      after: theirs,
      reason: null,
      by: 'Colin',
      at: '2026-03-01T11:00:00Z',
      inEffect: true,
    };
    http
      .expectOne({ method: 'GET', url })
      .flush({ ...utilisation, current: theirs, editList: [edit], changedBy: 'Colin', revision: 4 }, tag(4));
    await flushed;
    expect([bench.state(), bench.theirs()?.changedBy]).toEqual(['stale', 'Colin']);
    bench.keepMine();
    const saving = bench.flush();
    await settled();
    const request = http.expectOne({ method: 'PUT', url });
    expect(request.request.headers.get('If-Match')).toBe('"4"');
    expect(request.request.body.edits.map((sent: { kind: string }) => sent.kind)).toEqual(['cut added', 'kept own', 'cut added']);
    expect(request.request.body.bins.edges).toEqual([20, 40, 60]);
    request.flush({ ...utilisation, revision: 5 }, tag(5));
    await saving;
    expect(bench.state()).toBe('saved');
  });

  it('sends a cut that is moved on after a save as an edit of its own, and the one before as it was saved', async () => {
    vi.useFakeTimers();
    try {
      const moved = async (edge: number) => {
        bench.do(moveCut(utilisation.fine, bins(), 0, edge));
        await vi.advanceTimersByTimeAsync(1200);
        const [save] = http.match({ method: 'PUT', url });
        return save;
      };
      const first = await moved(30);
      const [kept] = first.request.body.edits;
      first.flush({ ...utilisation, revision: 4 }, tag(4));
      // Within two seconds of the first, which alone would be one gesture.
      await vi.advanceTimersByTimeAsync(400);
      const second = await moved(10);
      expect(second.request.body.edits).toEqual([
        kept,
        expect.objectContaining({ what: 'Cut moved from 30 to 10', before: kept.after }),
      ]);
      second.flush({ ...utilisation, revision: 5 }, tag(5));
      await vi.advanceTimersByTimeAsync(0);
      expect(bench.state()).toBe('saved');
    } finally {
      vi.useRealTimers();
    }
  });

  describe('a save that does not go well', () => {
    beforeEach(() => void vi.useFakeTimers());
    afterEach(() => void vi.useRealTimers());
    const saves = () => http.match({ method: 'PUT', url });
    /** An edit, and the save of it that goes out after its pause. */
    const edited = async () => {
      bench.do(addCut(utilisation.fine, bins(), 60));
      await vi.advanceTimersByTimeAsync(1200);
      return saves()[0];
    };
    const answered = () => vi.advanceTimersByTimeAsync(0);

    it('is tried again where what somebody else saved could not be read', async () => {
      (await edited()).flush(null, { status: 412, statusText: 'Stale' });
      await answered();
      http.expectOne({ method: 'GET', url }).error(new ProgressEvent('error'));
      await answered();
      expect(bench.state()).toBe('failed');
      await vi.advanceTimersByTimeAsync(4999);
      expect(saves()).toHaveLength(0);
      await vi.advanceTimersByTimeAsync(1);
      const [again] = saves();
      expect(again.request.body.bins.edges).toEqual([20, 40, 60]);
      again.flush(null, { status: 412, statusText: 'Stale' });
      await answered();
      http.expectOne({ method: 'GET', url }).flush({ ...utilisation, changedBy: 'Colin', revision: 4 }, tag(4));
      await answered();
      expect([bench.state(), bench.theirs()?.changedBy, bench.problem()]).toEqual(['stale', 'Colin', null]);
      await vi.advanceTimersByTimeAsync(60_000);
      expect(saves()).toHaveLength(0);
    });

    for (const status of [403, 409, 422])
      it(`is not sent again by itself when it is refused with ${status}, and nothing is lost`, async () => {
        (await edited()).flush({ title: 'These bins cannot be', code: 'no', detail: '' }, { status, statusText: 'No' });
        await answered();
        await vi.advanceTimersByTimeAsync(60_000);
        expect(saves()).toHaveLength(0);
        expect([bench.state(), bench.unsaved(), bins().edges]).toEqual(['refused', true, [20, 40, 60]]);
        expect(bench.problem()).toMatchObject({ status, title: 'These bins cannot be' });
        // The next edit is another question, and so is a person who asks again.
        bench.undo();
        await vi.advanceTimersByTimeAsync(1200);
        saves()[0].flush({ title: 'No', code: 'no' }, { status, statusText: 'No' });
        await answered();
        void bench.flush();
        await answered();
        saves()[0].flush({ ...utilisation, revision: 4 }, tag(4));
        await answered();
        expect([bench.state(), bench.problem()]).toEqual(['saved', null]);
      });

    it('is sent with what was edited while the refusal was under way', async () => {
      const refused = await edited();
      bench.undo();
      refused.flush(null, { status: 409, statusText: 'Conflict' });
      await answered();
      expect(bench.state()).toBe('waiting');
      await vi.advanceTimersByTimeAsync(1200);
      const [next] = saves();
      expect(next.request.body.bins.edges).toEqual([20, 40]);
      next.flush({ ...utilisation, revision: 4 }, tag(4));
      await answered();
      expect(bench.state()).toBe('saved');
    });

    for (const [status, headers, after] of [
      [408, {}, 5000],
      [429, { 'Retry-After': '30' }, 30_000],
      [503, {}, 5000],
    ] as const)
      it(`is tried again after ${after / 1000} s when it is answered with ${status}`, async () => {
        (await edited()).flush(null, { status, statusText: 'Later', headers });
        await answered();
        expect(bench.state()).toBe('failed');
        await vi.advanceTimersByTimeAsync(after - 1);
        expect(saves()).toHaveLength(0);
        await vi.advanceTimersByTimeAsync(1);
        saves()[0].flush({ ...utilisation, revision: 4 }, tag(4));
        await answered();
        expect(bench.state()).toBe('saved');
      });
  });

  it('saves two seconds after the first unsaved edit at the latest, however quickly others follow', async () => {
    vi.useFakeTimers();
    try {
      const sent: number[] = [];
      const start = performance.now();
      const edges = (count: number): number => (count % 2 === 0 ? 60 : 80);
      for (let count = 0; count < 12; count++) {
        // An edit each 0.8 s: no pause is as long as a save waits for.
        bench.do(count % 2 === 0 ? addCut(utilisation.fine, bins(), edges(count)) : mergeNumeric(utilisation.fine, bins(), 2));
        await vi.advanceTimersByTimeAsync(800);
        for (const request of http.match({ method: 'PUT', url })) {
          sent.push(performance.now() - start);
          request.flush({ ...utilisation, revision: 4 }, tag(4));
          await vi.advanceTimersByTimeAsync(0);
        }
      }
      // Looked at every 0.8 s: the first is sent at 2.0 s, and each after that within 2 s of the first edit it has.
      expect(sent.map((at) => Math.round(at / 100) / 10)).toEqual([2.4, 4.8, 7.2, 9.6]);
      // Left alone, the usual pause is waited for and no more.
      bench.do(addCut(utilisation.fine, bins(), 90));
      await vi.advanceTimersByTimeAsync(1199);
      expect(http.match({ method: 'PUT', url })).toHaveLength(0);
      await vi.advanceTimersByTimeAsync(1);
      for (const request of http.match({ method: 'PUT', url })) request.flush({ ...utilisation, revision: 5 }, tag(5));
      await vi.advanceTimersByTimeAsync(0);
      expect(bench.state()).toBe('saved');
    } finally {
      vi.useRealTimers();
    }
  });

  it('saves what was edited during a slow save as soon as that is answered, once its two seconds are over', async () => {
    vi.useFakeTimers();
    try {
      bench.do(addCut(utilisation.fine, bins(), 60));
      await vi.advanceTimersByTimeAsync(1200);
      const [slow] = http.match({ method: 'PUT', url });
      bench.do(addCut(utilisation.fine, bins(), 80));
      await vi.advanceTimersByTimeAsync(3000);
      expect(http.match({ method: 'PUT', url })).toHaveLength(0);
      slow.flush({ ...utilisation, revision: 4 }, tag(4));
      await vi.advanceTimersByTimeAsync(0);
      const [next] = http.match({ method: 'PUT', url });
      expect(next.request.body.bins.edges).toEqual([20, 40, 60, 80]);
      next.flush({ ...utilisation, revision: 5 }, tag(5));
      await vi.advanceTimersByTimeAsync(0);
      expect(bench.state()).toBe('saved');
    } finally {
      vi.useRealTimers();
    }
  });

  it('undoes what was saved before it was read', async () => {
    const list = ['first', 'second'].map((id, place) => ({
      id,
      kind: 'cut added' as const,
      what: `Cut added at ${60 + 10 * place}`,
      before: { ...utilisation.current, edges: place === 0 ? [20, 40] : [20, 40, 60] },
      after: { ...utilisation.current, edges: place === 0 ? [20, 40, 60] : [20, 40, 60, 70] },
      reason: { code: 'round number' as const, text: '' },
      by: 'Modeller',
      at: '2026-03-01T10:00:00Z',
      inEffect: true,
      carriedFrom: null,
      notCarried: null,
    }));
    const loading = bench.load('b', utilisation.id);
    await settled();
    http.expectOne(url).flush({ ...utilisation, current: list[1].after, editList: list, edits: 2 }, tag(3));
    await loading;
    bench.undo();
    expect(bins().edges).toEqual([20, 40, 60]);
    const flushed = bench.flush();
    await settled();
    const request = http.expectOne({ method: 'PUT', url });
    expect(request.request.body.edits).toMatchObject([{ id: 'first', reason: { code: 'round number' } }]);
    request.flush({ ...utilisation, revision: 4 }, tag(4));
    await flushed;
  });

  it('brings back by undo what classing anew ended', async () => {
    bench.do(addCut(utilisation.fine, bins(), 60));
    const flushed = bench.flush();
    await settled();
    http.expectOne({ method: 'PUT', url }).flush({ ...utilisation, revision: 4 }, tag(4));
    await flushed;
    const reading = bench.readAnew();
    await settled();
    const automatic = { ...utilisation.automatic, edges: [50] };
    http.expectOne(url).flush({ ...utilisation, automatic, current: automatic, revision: 5 }, tag(5));
    await reading;
    expect([bench.state(), bins().edges]).toEqual(['saved', [50]]);
    bench.undo();
    expect(bins().edges).toEqual([20, 40, 60]);
    const saving = bench.flush();
    await settled();
    const request = http.expectOne({ method: 'PUT', url });
    expect(request.request.headers.get('If-Match')).toBe('"5"');
    expect(request.request.body.edits).toMatchObject([
      { kind: 'kept own', what: 'Kept own bins over those classed anew', before: automatic, after: utilisation.automatic },
      { kind: 'cut added', what: 'Cut added at 60' },
    ]);
    request.flush({ ...utilisation, revision: 6 }, tag(6));
    await saving;
  });

  it('takes theirs', async () => {
    bench.do(addCut(utilisation.fine, bins(), 60));
    const flushed = bench.flush();
    await settled();
    http.expectOne({ method: 'PUT', url }).flush(null, { status: 412, statusText: 'Stale' });
    await settled();
    http.expectOne({ method: 'GET', url }).flush({ ...utilisation, revision: 4 }, tag(4));
    await flushed;
    bench.takeTheirs();
    expect([bench.state(), bins().edges]).toEqual(['saved', [20, 40]]);
    // Own edits are not lost: undo comes to them first.
    bench.undo();
    expect([bench.state(), bins().edges]).toEqual(['waiting', [20, 40, 60]]);
    bench.redo();
    const saving = bench.flush();
    await settled();
    http.expectOne({ method: 'PUT', url }).flush({ ...utilisation, revision: 5 }, tag(5));
    await saving;
    expect(bins().edges).toEqual([20, 40]);
  });

  it('splits a fine class for a value that lies inside one', async () => {
    const adding = bench.addCutAt(33);
    await settled();
    const request = http.expectOne({ method: 'POST', url: `${url}/fine-edges` });
    expect(request.request.body).toEqual({ edge: 33 });
    const split = (counts: { rows: number[]; goods: number[]; bads: number[] }) => {
      const parts = (values: number[], left: number) => [...values.slice(0, 3), left, values[3] - left, ...values.slice(4)];
      return { rows: parts(counts.rows, 30), goods: parts(counts.goods, 27), bads: parts(counts.bads, 3) };
    };
    const fine = {
      ...utilisation.fine,
      edges: [10, 20, 30, 33, 40, 50, 60, 70, 80, 90],
      development: split(utilisation.fine.development),
      holdOut: split(utilisation.fine.holdOut),
    };
    request.flush({ ...utilisation, fine });
    expect(await adding).toBe(true);
    expect(bins().edges).toEqual([20, 33, 40]);
    expect(bench.reading()?.bins[1].figures.development?.rows).toBe(130);
    // Not of this test: the save that would follow.
    bench.undo();
    const flushed = bench.flush();
    await settled();
    http.expectOne({ method: 'PUT', url }).flush(utilisation, tag(4));
    await flushed;
  });
});
