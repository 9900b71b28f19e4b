import type { HarnessLoader } from '@angular/cdk/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { provideHttpClient, withInterceptors } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { MatButtonHarness } from '@angular/material/button/testing';
import { MatDialogHarness } from '@angular/material/dialog/testing';
import { provideRouter } from '@angular/router';
import { problemInterceptor } from '../../../core/http/interceptors';
import { provideIcons } from '../../../ui/register-icons';
import { DictionaryStore } from '../data/dictionary-store';
import { DraftStore } from '../data/draft-store';
import { ColumnsPage } from './columns-page';

const address = '/api/models/m1/samples/s1';
const draft = {
  content: {
    columns: [],
    outcome: { good: [], bad: [], indeterminate: [], excluded: [] },
    declined: null,
    exclusions: [],
    partition: { by: 'seed', seed: 1, holdOutShare: 0.3, outOfTime: null },
  },
  revision: 1,
  savedAt: '2026-11-03T13:00:00Z',
  savedBy: 'Mara',
  problems: [],
};
const dictionary = {
  entries: [],
  revision: 1,
  savedAt: null,
  savedBy: null,
  carried: null,
  readAgain: null,
  abilities: ['edit'],
};

describe('a dictionary file that is imported', () => {
  let fixture: ComponentFixture<ColumnsPage>;
  let server: HttpTestingController;
  let outside: HarnessLoader;
  const shown = (): string => (fixture.nativeElement as HTMLElement).textContent?.replace(/\s+/g, ' ') ?? '';
  async function settled(): Promise<void> {
    await new Promise((resolve) => setTimeout(resolve));
    fixture.detectChanges();
  }
  const tagged = { headers: { ETag: '"1"' } };
  /** As a person does that picks it. */
  async function choose(text: string): Promise<void> {
    const picker = (fixture.nativeElement as HTMLElement).querySelector<HTMLInputElement>('input[type=file]')!;
    const file = new File([Uint8Array.from(text, (sign) => sign.charCodeAt(0))], 'dictionary.csv');
    Object.defineProperty(picker, 'files', { value: [file], configurable: true });
    picker.dispatchEvent(new Event('change'));
    await settled();
    await settled();
  }
  /** The dialog comes with a bundle of its own. */
  const dialog = (): Promise<MatDialogHarness> => vi.waitFor(() => outside.getHarness(MatDialogHarness), 5_000);
  const press = async (text: string): Promise<void> => (await outside.getHarness(MatButtonHarness.with({ text }))).click();

  beforeEach(async () => {
    TestBed.configureTestingModule({
      providers: [
        provideHttpClient(withInterceptors([problemInterceptor])),
        provideHttpClientTesting(),
        provideIcons(),
        provideRouter([]),
        DraftStore,
        DictionaryStore,
      ],
    });
    server = TestBed.inject(HttpTestingController);
    fixture = TestBed.createComponent(ColumnsPage);
    outside = TestbedHarnessEnvironment.documentRootLoader(fixture);
    fixture.componentRef.setInput('modelId', 'm1');
    fixture.componentRef.setInput('sampleId', 's1');
    fixture.detectChanges();
    server.expectOne(address).flush({ fileName: 'a.csv', state: 'ready', erased: null, abilities: ['define'] });
    server.expectOne(`${address}/columns`).flush({ columns: [], finding: '' });
    await settled();
    server.expectOne(`${address}/draft`).flush(draft, tagged);
    server.expectOne(`${address}/dictionary`).flush(dictionary, tagged);
    await settled();
  });

  it('in Windows-1252 is asked about with the line, and sent with its own signs', async () => {
    await choose('column,label\nage,\xc2ge du client\n');
    const open = await dialog();
    expect(await open.getTitleText()).toBe('Line 2 is not UTF-8; read as Windows-1252?');
    expect(await open.getText()).toContain('age,Âge du client');
    server.expectNone(`${address}/dictionary/file`);
    await press('Read as Windows-1252');
    const sent = await vi.waitFor(() => server.expectOne(`${address}/dictionary/file`));
    expect(sent.request.body).toEqual({ text: 'column,label\nage,Âge du client\n' });
    sent.flush({ ...dictionary, revision: 2 }, tagged);
    (await vi.waitFor(() => server.expectOne(`${address}/draft`))).flush(draft, tagged);
    await settled();
    expect(shown()).toContain('The dictionary was imported.');
  });

  it('that is not UTF-8 is not sent where it is not to be read otherwise, and that is said', async () => {
    await choose('column,label\nage,\xc2ge du client\n');
    await dialog();
    await press('Cancel');
    await vi.waitFor(() => {
      fixture.detectChanges();
      expect(shown()).toMatch(/Line 2 is not UTF-8: nothing was imported\. ?Save the file as CSV in UTF-8/);
    });
    server.expectNone(`${address}/dictionary/file`);
  });

  it('that is neither is refused with its line and not sent', async () => {
    await choose('column,label\nage,\x81ge\n');
    expect(shown()).toContain('Line 2 is neither UTF-8 nor Windows-1252.');
    server.expectNone(`${address}/dictionary/file`);
  });
});
