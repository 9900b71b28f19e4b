import { provideHttpClient, withInterceptors } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { provideRouter } from '@angular/router';
import type { ProblemItem } from '@tallystone/contracts/problems/schema';
import type { DoubtfulLines, Preview, ReadingChoices } from '@tallystone/contracts/samples/reading';
import { type Run, Runs } from '../../../core/events/runs';
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
const sample = { fileName: 'a.csv', reading, rows: 2, runId: null, definitions: 0, erased: null };
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
  async function open({
    missing,
    shown = preview,
    problems = [],
    state = 'ready',
  }: {
    missing?: string | string[];
    shown?: Preview;
    problems?: readonly ProblemItem[];
    state?: string;
  } = {}): Promise<Partial<ReadingChoices>> {
    if (missing !== undefined) fixture.componentRef.setInput('missing', missing);
    fixture.detectChanges();
    server.expectOne(address).flush({ ...sample, state, problems, abilities: ['read-file'] });
    await settled();
    const asked = server.expectOne(`${address}/preview`);
    asked.flush(shown);
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
    expect(await open({ missing: ['NaN', 'NA', '0x10'] })).toEqual({ ...reading, missing: ['', 'NA', 'NaN', '0x10'] });
  });

  it('takes a single token, and none', async () => {
    expect((await open({ missing: 'Inf' })).missing).toEqual(['', 'NA', 'Inf']);
  });

  it('shows doubtful lines before the first rows, and lets nobody read on', async () => {
    expect(await open()).toEqual(reading);
    const headings = [...page().querySelectorAll('h3')].map(({ textContent }) => textContent);
    expect(headings).toEqual(['Doubtful lines', 'First rows']);
    expect(page().querySelector('[aria-label="Doubtful lines"]')?.textContent).toContain('1 field where the header has 2');
    const read = [...page().querySelectorAll('button')].find(({ textContent }) => textContent.includes('Read the file again'));
    expect(read?.disabled).toBe(true);
  });

  it('says that a sample is not there', async () => {
    fixture.detectChanges();
    const gone = { title: 'Not found', status: 404, code: 'not-found', detail: 'There is no such sample.' };
    server.expectOne(address).flush(gone, { status: 404, statusText: 'Not Found' });
    await settled();
    expect(page().textContent).toContain('There is no such sample.');
    server.verify();
  });

  it('lets the file say anew which columns hold no dates, and tells those of a reading that stays', async () => {
    const stored: ReadingChoices = { ...reading, dateOrder: 'day-month-year', notDates: ['branch_code'] };
    fixture.detectChanges();
    server.expectOne(address).flush({ ...sample, reading: stored, state: 'ready', problems: [], abilities: ['read-file'] });
    await settled();
    const asked = server.expectOne(`${address}/preview`);
    // Under another order it would be other columns.
    expect(asked.request.body).toEqual({ ...reading, dateOrder: 'day-month-year' });
    asked.flush({ ...preview, choices: stored, problems: [], doubtful: { count: 0, lines: [] } });
    await settled();
    [...page().querySelectorAll('button')].find(({ textContent }) => textContent.includes('Read the file again'))?.click();
    const dialog = await vi.waitFor(() => {
      const button = [...document.querySelectorAll<HTMLElement>('mat-dialog-container button')].find(
        ({ textContent }) => textContent?.trim() === 'Read again',
      );
      if (!button) throw new Error('no dialog yet');
      return button;
    }, 5_000);
    dialog.click();
    const started = await vi.waitFor(() => server.expectOne(`${address}/readings`), 5_000);
    expect(started.request.body).toEqual(stored);
  });

  it('tells which columns hold no dates where the reading stays', async () => {
    fixture.detectChanges();
    server
      .expectOne(address)
      .flush({ ...sample, reading: { ...reading, notDates: ['branch_code'] }, state: 'ready', problems: [], abilities: [] });
    await settled();
    expect(page().textContent).toContain('No dates, whatever their form');
    expect(page().textContent).toContain('branch_code');
  });

  describe('of a file whose last reading found lines beyond the preview', () => {
    const clean: Preview = { ...preview, doubtful: { count: 0, lines: [] }, problems: [], looked: { records: 2, bytes: 10, whole: false } };
    const refusal = { code: 'ragged', message: 'Line 60002 has 1 field where the header has 2.', where: { line: 60_002 } };
    const found: DoubtfulLines = {
      count: 2,
      lines: [
        { line: 60_002, record: 60_001, text: 'Old Mill Lane', clipped: false, doubts: ['1 field where the header has 2'] },
        { line: 60_003, record: 60_002, text: 'M\\xE1laga,1', clipped: false, doubts: ['not UTF-8'] },
      ],
    };
    const section = (): string | undefined => page().querySelector('[aria-label="Doubtful lines"]')?.textContent;

    it('shows them as it does those of the preview', async () => {
      await open({ shown: clean, problems: [refusal] });
      server.expectOne(`${address}/doubtful-lines`).flush(found);
      await settled();
      expect(section()).toContain('When the file was last read, 2 lines of it were doubtful.');
      expect(section()).toContain('Old Mill Lane');
      expect(section()).toContain('M\\xE1laga,1');
      expect(page().textContent).toContain(refusal.message);
    });

    it('shows those of the preview in their place where it finds any', async () => {
      await open({ problems: [refusal] });
      server.expectOne(`${address}/doubtful-lines`).flush(found);
      await settled();
      expect(section()).toContain('1 line of the file is doubtful.');
      expect(section()).not.toContain('Old Mill Lane');
      expect(page().textContent).not.toContain(refusal.message);
    });

    it('says why they cannot be shown', async () => {
      await open({ shown: clean, problems: [refusal] });
      const problem = { type: 'about:blank', title: 'Conflict', status: 409, code: 'rows-erased', detail: 'The rows were erased.', problems: [] };
      server.expectOne(`${address}/doubtful-lines`).flush(problem, { status: 409, statusText: 'Conflict' });
      await settled();
      expect(section()).toBeUndefined();
      expect(page().textContent).toContain('The rows were erased.');
    });

    it('shows them once a reading that was started here is refused, and anew after another', async () => {
      await open({ shown: clean, state: 'received' });
      for (const [id, text] of [['r1', 'Old Mill Lane'], ['r2', 'Quince Yard']] as const) {
        const run = { id, kind: 'sample.read', entity: 'sample', entityId: 's1', attempt: 1, phase: null, share: null, abilities: [], createdAt: '', problem: null };
        const samples = (): void => server.match(address).forEach((asked) => asked.flush({ ...sample, state: 'received', problems: [refusal], abilities: ['read-file'] }));
        [...page().querySelectorAll('button')].find(({ textContent }) => textContent.includes('Read the file'))?.click();
        server.expectOne(`${address}/readings`).flush({ ...run, state: 'queued' });
        await settled();
        samples();
        await settled();
        expect(section()).toBeUndefined();
        server.expectNone(`${address}/doubtful-lines`);
        TestBed.inject(Runs).follow({ ...run, state: 'failed' } as unknown as Run);
        await settled();
        samples();
        await settled();
        server.expectOne(`${address}/doubtful-lines`).flush({ count: 1, lines: [{ ...found.lines[0], text }] });
        await settled();
        expect(section()).toContain(text);
      }
    });

    it('asks for none where the last reading found nothing wrong', async () => {
      await open({ shown: clean });
      server.expectNone(`${address}/doubtful-lines`);
      expect(section()).toBeUndefined();
    });
  }); // prettier-ignore
});
