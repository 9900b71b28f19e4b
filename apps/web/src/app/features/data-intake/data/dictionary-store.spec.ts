import { provideHttpClient, withInterceptors } from '@angular/common/http';
import { HttpTestingController, type TestRequest, provideHttpClientTesting } from '@angular/common/http/testing';
import { TestBed } from '@angular/core/testing';
import { problemInterceptor } from '../../../core/http/interceptors';
import { type Dictionary, type DictionaryEntry, DictionaryStore } from './dictionary-store';

describe('the dictionary under edit', () => {
  let store: DictionaryStore;
  let server: HttpTestingController;
  const address = '/api/models/m1/samples/s1/dictionary';
  const entry = (column: string, label: string): DictionaryEntry => ({
    column,
    label,
    unit: '',
    description: '',
    treatments: [],
  });
  const dictionary = (revision: number, ...entries: DictionaryEntry[]): Dictionary => ({
    entries,
    revision,
    savedAt: null,
    savedBy: null,
    carried: null,
    readAgain: null,
    abilities: ['edit'],
  });
  const next = (method: string, url = address): Promise<TestRequest> =>
    vi.waitUntil(() => server.match((request) => request.method === method && request.url === url).at(0));
  const answer = async (method: string, value: Dictionary, url = address): Promise<TestRequest> => {
    const request = await next(method, url);
    request.flush(value, { headers: { ETag: `"${value.revision}"` } });
    return request;
  };
  const refuse = async (method: string, url = address): Promise<void> =>
    (await next(method, url)).flush(
      { title: 'Stale', status: 412, code: 'stale', detail: 'Saved since.' },
      { status: 412, statusText: 'Precondition Failed' },
    );

  beforeEach(async () => {
    TestBed.configureTestingModule({
      providers: [provideHttpClient(withInterceptors([problemInterceptor])), provideHttpClientTesting(), DictionaryStore],
    });
    store = TestBed.inject(DictionaryStore);
    server = TestBed.inject(HttpTestingController);
    const opened = store.open('m1', 's1');
    await answer('GET', dictionary(1, entry('age', 'Age')));
    await opened;
  });

  it('saves on top of what someone else said of other columns', async () => {
    const saved = store.change(entry('age', 'Age at application'));
    await refuse('PUT');
    await answer('GET', dictionary(2, entry('age', 'Age'), entry('home', 'Home')));
    const again = await answer('PUT', dictionary(3, entry('home', 'Home'), entry('age', 'Age at application')));
    await saved;
    expect(again.request.body).toEqual({ entries: [entry('home', 'Home'), entry('age', 'Age at application')] });
    expect(again.request.headers.get('If-Match')).toBe('"2"');
    expect(store.conflicts()).toEqual([]);
    expect(store.unsaved()).toBe(false);
  });

  it('loses nothing that was typed where both changed a column, and saves it only when told', async () => {
    const saved = store.change(entry('age', 'Mine'));
    await refuse('PUT');
    await answer('GET', dictionary(2, entry('age', 'Theirs')));
    await saved;
    expect(store.conflicts()).toEqual([{ mine: entry('age', 'Mine'), theirs: entry('age', 'Theirs') }]);
    expect(store.entry('age').label).toBe('Mine');
    expect(store.unsaved()).toBe(true);
    await store.change(entry('age', 'Mine, longer'));
    server.expectNone({ method: 'PUT' });
    const kept = store.keepMine('age');
    const request = await answer('PUT', dictionary(3, entry('age', 'Mine, longer')));
    await kept;
    expect(request.request.body).toEqual({ entries: [entry('age', 'Mine, longer')] });
    expect([store.conflicts(), store.unsaved(), store.entry('age').label]).toEqual([[], false, 'Mine, longer']);
  });

  it('takes theirs when told', async () => {
    const saved = store.change(entry('age', 'Mine'));
    await refuse('PUT');
    await answer('GET', dictionary(2, entry('age', 'Theirs')));
    await saved;
    store.takeTheirs('age');
    expect([store.conflicts(), store.unsaved(), store.entry('age').label]).toEqual([[], false, 'Theirs']);
    server.verify();
  });

  it('keeps a file that came too late, to be imported over theirs', async () => {
    const first = store.importFile('column,label\nage,Age in years\n');
    await refuse('POST', `${address}/file`);
    await answer('GET', dictionary(2, entry('age', 'Theirs')));
    expect(await first).toBe(false);
    expect(store.fileRefused()).toBe(true);
    const again = store.importAgain();
    const request = await answer('POST', dictionary(3, entry('age', 'Age in years')), `${address}/file`);
    expect(await again).toBe(true);
    expect(request.request.body).toEqual({ text: 'column,label\nage,Age in years\n' });
    expect(request.request.headers.get('If-Match')).toBe('"2"');
    expect(store.fileRefused()).toBe(false);
  });

  it('keeps what was saved from here while it was read anew', async () => {
    const opened = store.open('m1', 's1');
    const read = await next('GET');
    const saved = store.change(entry('age', 'Mine'));
    await answer('PUT', dictionary(2, entry('age', 'Mine')));
    await saved;
    read.flush(dictionary(1, entry('age', 'Age')), { headers: { ETag: '"1"' } });
    await opened;
    expect(store.entry('age').label).toBe('Mine');
  });

  it('is read anew when it is opened again, as after another reading of the file', async () => {
    const opened = store.open('m1', 's1');
    await answer('GET', dictionary(4, entry('age', 'Read anew')));
    await opened;
    expect(store.entry('age').label).toBe('Read anew');
  });
});
