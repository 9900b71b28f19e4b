import { provideHttpClient, withInterceptors } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { TestBed } from '@angular/core/testing';
import { addCut, mergeNumeric, type NumericBins } from '@tallystone/numeric/bench';
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

  it('meets whoever saved first, and keeps mine over theirs as one more edit', async () => {
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
    expect(request.request.body.edits.map((sent: { kind: string }) => sent.kind)).toEqual(['cut added', 'kept own']);
    expect(request.request.body.bins.edges).toEqual([20, 40, 60]);
    request.flush({ ...utilisation, revision: 5 }, tag(5));
    await saving;
    expect(bench.state()).toBe('saved');
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
