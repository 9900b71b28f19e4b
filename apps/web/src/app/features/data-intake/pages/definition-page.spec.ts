import { provideHttpClient, withInterceptors } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { provideRouter } from '@angular/router';
import { problemInterceptor } from '../../../core/http/interceptors';
import { provideIcons } from '../../../ui/register-icons';
import { DraftStore } from '../data/draft-store';
import { DefinitionPage } from './definition-page';

const address = '/api/models/m1/samples/s1';

describe('DefinitionPage', () => {
  let fixture: ComponentFixture<DefinitionPage>;
  let server: HttpTestingController;
  const page = (): HTMLElement => fixture.nativeElement as HTMLElement;
  const texts = (selector: string): string[] =>
    [...page().querySelectorAll(selector)].map(({ textContent }) => textContent.replace(/\s+/g, ' ').trim());

  async function settled(): Promise<void> {
    await new Promise((resolve) => setTimeout(resolve));
    fixture.detectChanges();
  }
  async function answer(path: string, body: object): Promise<void> {
    server.expectOne(`${address}${path}`).flush(body);
    await settled();
  }

  beforeEach(() => {
    TestBed.configureTestingModule({
      providers: [
        provideHttpClient(withInterceptors([problemInterceptor])),
        provideHttpClientTesting(),
        provideIcons(),
        provideRouter([]),
        DraftStore,
      ],
    });
    server = TestBed.inject(HttpTestingController);
    fixture = TestBed.createComponent(DefinitionPage);
    fixture.componentRef.setInput('modelId', 'm1');
    fixture.componentRef.setInput('sampleId', 's1');
    fixture.detectChanges();
  });

  it('says of a file that has not been read that it has not, leads to its reading, and asks for no draft', async () => {
    const unread = {
      id: 's1',
      modelId: 'm1',
      fileName: 'a.csv',
      state: 'received',
      rows: null,
      runId: null,
      definitions: 0,
      erased: null,
    };
    await answer('', { ...unread, abilities: ['read-file'] });
    await answer('/columns', { columns: [], rows: 0, duplicateRows: 0, finding: 'The file has not been read yet.' });
    await answer('/definitions', { definitions: [] });
    expect(texts('ts-empty .title')).toEqual(['The file has not been read yet']);
    expect(page().querySelector('ts-empty a')?.getAttribute('href')).toBe('/models/m1/sample/s1/reading');
    expect(texts('section, .problem, .finding')).toEqual([]);
    expect(texts('nav .pages a')).toEqual(['Reading']);
    server.verify();
  });

  it('says once that a sample is not there', async () => {
    const gone = { title: 'Not found', status: 404, code: 'not-found', detail: 'It does not exist, or it is not open to you.' };
    for (const path of ['', '/columns', '/definitions'])
      server.expectOne(`${address}${path}`).flush(gone, { status: 404, statusText: 'Not Found' });
    await settled();
    expect(texts('.problem .title')).toEqual(['Not found']);
    server.verify();
  });
});
