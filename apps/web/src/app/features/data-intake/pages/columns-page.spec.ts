import { provideHttpClient, withInterceptors } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { provideRouter } from '@angular/router';
import type { ColumnList, ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { Draft } from '@tallystone/contracts/samples/definition';
import type { Dictionary } from '@tallystone/contracts/samples/dictionary';
import { problemInterceptor } from '../../../core/http/interceptors';
import { provideIcons } from '../../../ui/register-icons';
import { DictionaryStore } from '../data/dictionary-store';
import { DraftStore } from '../data/draft-store';
import { ColumnsPage } from './columns-page';

const address = '/api/models/m1/samples/s1';
const sample = {
  fileName: 'applicants.csv',
  state: 'ready',
  rows: 200,
  runId: null,
  definitions: 0,
  erased: null,
  abilities: ['read-file', 'define'],
};
const profile: ColumnProfile = {
  position: 0,
  column: 'amount',
  kind: 'numeric',
  rows: 200,
  distinct: 199,
  missing: 0,
  missingTokens: [],
  specialSuspects: [],
  mostFrequent: [],
  valuesComplete: false,
  numeric: null,
  date: null,
  text: null,
  flags: [],
  suggestedRole: 'characteristic',
  suggestedProtected: false,
  suggestion: 'Nothing speaks against it.',
  hashed: false,
};
const columns: ColumnList = {
  columns: [profile],
  rows: 200,
  duplicateRows: 0,
  finding: '200 rows and 1 columns; nothing stands out.',
};
const draft: Draft = {
  content: {
    columns: [
      { column: 'amount', kind: 'numeric', role: 'characteristic', protected: false, citation: null, special: [], reason: null },
    ],
    outcome: { good: [], bad: [], indeterminate: [], excluded: [] },
    declined: null,
    exclusions: [],
    partition: { by: 'seed', seed: 1, holdOutShare: 0.3, outOfTime: null },
  },
  revision: 1,
  savedAt: '2026-01-01T00:00:00Z',
  savedBy: 'Marian',
  problems: [],
};
const dictionary: Dictionary = {
  entries: [],
  revision: 0,
  savedAt: null,
  savedBy: null,
  carried: null,
  readAgain: null,
  abilities: ['edit'],
};

describe('ColumnsPage', () => {
  let fixture: ComponentFixture<ColumnsPage>;
  let server: HttpTestingController;
  const page = (): HTMLElement => fixture.nativeElement as HTMLElement;
  const texts = (selector: string): string[] =>
    [...page().querySelectorAll(selector)].map(({ textContent }) => textContent.replace(/\s+/g, ' ').trim());

  async function settled(): Promise<void> {
    await new Promise((resolve) => setTimeout(resolve));
    fixture.detectChanges();
  }
  /** Answers a request once it is there, whatever it waits for. */
  async function answer(path: string, body: object): Promise<void> {
    const asked = await vi.waitUntil(() => server.match(`${address}${path}`).at(0));
    asked.flush(body, { headers: { ETag: '"1"' } });
    await settled();
  }
  async function open(words: Partial<Dictionary> = {}): Promise<void> {
    await answer('', sample);
    await answer('/columns', columns);
    await answer('/draft', draft);
    await answer('/dictionary', { ...dictionary, ...words });
  }

  beforeEach(() => {
    TestBed.configureTestingModule({
      providers: [
        provideHttpClient(withInterceptors([problemInterceptor])),
        provideHttpClientTesting(),
        provideIcons(),
        provideRouter([]),
        DictionaryStore,
        DraftStore,
      ],
    });
    server = TestBed.inject(HttpTestingController);
    fixture = TestBed.createComponent(ColumnsPage);
    fixture.componentRef.setInput('modelId', 'm1');
    fixture.componentRef.setInput('sampleId', 's1');
    fixture.detectChanges();
  });

  it('shows the columns with what the draft takes them for', async () => {
    await open();
    expect(texts('.finding')).toEqual([columns.finding]);
    expect(texts('ts-table tbody tr').map((row) => row.split(' ').slice(0, 3))).toEqual([
      ['amount', 'characteristic', 'numeric'],
    ]);
    expect(texts('ts-taken-over')).toEqual([]);
  });

  it('says what was taken over from an earlier sample, and what stayed when the file was read again', async () => {
    await open({
      carried: { sampleId: 's0', fileName: 'applicants-2024.csv', columns: ['amount'], notCarried: [], wordsFrom: null },
      readAgain: { columns: ['amount'], lost: [{ what: 'region', why: 'is not in the file any more.' }] },
    });
    expect(texts('ts-taken-over p')).toEqual([
      'Roles, special codes and words of 1 column are carried over from applicants-2024.csv: same name and kind.',
      'The file was read again: the draft stayed as it was but for 1 point.',
    ]);
    expect(texts('ts-taken-over li')).toEqual(['region is not in the file any more.']);
  });

  describe('of a file that has not been read', () => {
    const unread = { ...sample, id: 's1', modelId: 'm1', state: 'received', rows: null, abilities: ['read-file'] };
    const nothing: ColumnList = { columns: [], rows: 0, duplicateRows: 0, finding: 'The file has not been read yet.' };

    it('says so once, leads to its reading, and asks for no draft', async () => {
      await answer('', unread);
      await answer('/columns', nothing);
      expect(page().textContent.match(/has not been read yet/g)).toHaveLength(1);
      expect(texts('ts-empty .text')).toEqual(['Its columns are known once it has been read.']);
      expect(page().querySelector('ts-empty a')?.getAttribute('href')).toBe('/models/m1/sample/s1/reading');
      expect(texts('ts-table, .problem, ts-page-header a')).toEqual([]);
      expect(texts('nav .pages a')).toEqual(['Reading']);
      server.verify();
    });

    it('says that nobody will read it where its rows were erased', async () => {
      const erased = { at: '2026-02-01T00:00:00Z', by: 'Ida', reason: 'Sent by mistake.', sample: 1, fileName: 'applicants.csv' };
      await answer('', { ...unread, erased, abilities: [] });
      await answer('/columns', nothing);
      expect(texts('ts-tombstone .ts-second')).toEqual(['The file had not been read before: nothing is known of its columns.']);
      expect(texts('ts-empty')).toEqual([]);
    });
  });

  it('says once that a sample is not there', async () => {
    const gone = { title: 'Not found', status: 404, code: 'not-found', detail: 'It does not exist, or it is not open to you.' };
    for (const path of ['', '/columns']) {
      server.expectOne(`${address}${path}`).flush(gone, { status: 404, statusText: 'Not Found' });
      await settled();
    }
    expect(texts('.problem .title')).toEqual(['Not found']);
    server.verify();
  });
});
