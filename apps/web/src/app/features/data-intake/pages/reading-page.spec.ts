import { provideHttpClient, withInterceptors } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { provideRouter } from '@angular/router';
import type { Preview, ReadingChoices } from '@tallystone/contracts/samples/reading';
import { problemInterceptor } from '../../../core/http/interceptors';
import { provideIcons } from '../../../ui/register-icons';
import { ReadingPage } from './reading-page';

const address = '/api/models/m1/samples/s1';
const reading: ReadingChoices = {
  delimiter: ',',
  encoding: 'utf-8',
  decimal: '.',
  thousands: null,
  trim: true,
  missing: ['', 'NA'],
};
const preview: Preview = {
  choices: reading,
  reasons: [],
  header: ['a', 'b'],
  rows: [{ record: 1, line: 2, cells: ['1', '2'] }],
  columns: ['a', 'b'].map((column) => ({ column, kind: 'numeric', against: null })),
  doubtful: { count: 1, lines: [{ line: 3, record: 2, text: '1', clipped: false, doubts: ['1 field where the header has 2'] }] },
  looked: { records: 2, bytes: 10, whole: true },
  problems: [{ code: 'ragged', message: 'Line 3 has 1 field where the header has 2.', where: { line: 3 } }],
  warnings: [],
};

describe('ReadingPage', () => {
  let fixture: ComponentFixture<ReadingPage>;
  let server: HttpTestingController;
  const page = (): HTMLElement => fixture.nativeElement as HTMLElement;
  async function settled(): Promise<void> {
    await new Promise((resolve) => setTimeout(resolve));
    fixture.detectChanges();
  }
  /** Answers for the sample, and tells with which choices the file is looked at. */
  async function open(missing?: string | string[]): Promise<Partial<ReadingChoices>> {
    if (missing !== undefined) fixture.componentRef.setInput('missing', missing);
    fixture.detectChanges();
    const sample = {
      fileName: 'a.csv',
      state: 'ready',
      reading,
      rows: 2,
      runId: null,
      problems: [],
      definitions: 0,
      erased: null,
    };
    server.expectOne(address).flush({ ...sample, abilities: ['read-file'] });
    await settled();
    const asked = server.expectOne(`${address}/preview`);
    asked.flush(preview);
    await settled();
    return asked.request.body as Partial<ReadingChoices>;
  }

  beforeEach(() => {
    TestBed.configureTestingModule({
      providers: [
        provideHttpClient(withInterceptors([problemInterceptor])),
        provideHttpClientTesting(),
        provideIcons(),
        provideRouter([]),
      ],
    });
    server = TestBed.inject(HttpTestingController);
    fixture = TestBed.createComponent(ReadingPage);
    fixture.componentRef.setInput('modelId', 'm1');
    fixture.componentRef.setInput('sampleId', 's1');
  });

  it('looks at the file as it was read, with the tokens that a column asked for', async () => {
    expect(await open(['NaN', 'NA', '0x10'])).toEqual({ ...reading, missing: ['', 'NA', 'NaN', '0x10'] });
  });

  it('takes a single token, and none', async () => {
    expect((await open('Inf')).missing).toEqual(['', 'NA', 'Inf']);
  });

  it('shows doubtful lines below the first rows, and lets nobody read on', async () => {
    expect(await open()).toEqual(reading);
    const headings = [...page().querySelectorAll('h3')].map(({ textContent }) => textContent);
    expect(headings).toEqual(['First rows', 'Doubtful lines']);
    expect(page().querySelector('[aria-label="Doubtful lines"]')?.textContent).toContain('1 field where the header has 2');
    const read = [...page().querySelectorAll('button')].find(({ textContent }) => textContent.includes('Read the file again'));
    expect(read?.disabled).toBe(true);
  });
});
