import type { HarnessLoader } from '@angular/cdk/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { provideHttpClient, withInterceptors } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { MatButtonHarness } from '@angular/material/button/testing';
import { MatDialogHarness } from '@angular/material/dialog/testing';
import { MatInputHarness } from '@angular/material/input/testing';
import { provideRouter } from '@angular/router';
import type { ColumnQuality, QualityFlag, QualityReport, QualityState } from '@tallystone/contracts/samples/quality';
import { problemInterceptor } from '../../../core/http/interceptors';
import { provideIcons } from '../../../ui/register-icons';
import { QualityPage } from './quality-page';

const column = (name: string, change: Partial<ColumnQuality> = {}): ColumnQuality => ({
  position: 0,
  column: name,
  kind: 'numeric',
  role: 'characteristic',
  missing: 0,
  special: 0,
  unreadable: 0,
  distinct: 10,
  quantiles: null,
  outliers: null,
  informationValue: 0.1,
  drift: null,
  ...change,
});
const flag: QualityFlag = { column: 'fee', code: 'leakage-value', weight: 'look', finding: 'IV 2.1.', answer: null };
const report: QualityReport = {
  definitionId: 'd1',
  definitionNumber: 2,
  madeAt: '2026-11-03T13:00:00Z',
  rows: 2400,
  duplicateRows: 0,
  months: [],
  baseline: null,
  columns: [column('income'), column('fee', { missing: 600 })],
  flags: [flag],
  finding: '2 400 rows and 2 columns: 1 flag waits for an answer.',
};
const state: QualityState = { report, definitionId: 'd1', runId: null, finding: report.finding, abilities: ['answer'] };
const address = '/api/models/m1/samples/s1';

describe('QualityPage', () => {
  let fixture: ComponentFixture<QualityPage>;
  let server: HttpTestingController;
  let outside: HarnessLoader;

  async function settled(): Promise<void> {
    await new Promise((resolve) => setTimeout(resolve));
    fixture.detectChanges();
  }
  /** Answers for the sample, the report and the column that is shown first; tells which column that is. */
  async function open(change: Partial<QualityState> = {}): Promise<string | null> {
    server.expectOne(address).flush({ fileName: 'applicants.csv', erased: null });
    server.expectOne(`${address}/quality`).flush({ ...state, ...change });
    await settled();
    await settled();
    const asked = server.match(({ url }) => url === `${address}/quality/column`).at(0);
    asked?.flush({ ...column('fee'), groups: [], histogram: null, months: [] });
    await settled();
    return asked?.request.params.get('column') ?? null;
  }
  const page = (): HTMLElement => fixture.nativeElement as HTMLElement;
  const shown = (): string => page().textContent?.replace(/\s+/g, ' ') ?? '';
  /** The dialog comes with a bundle of its own, once somebody asks for it. */
  const dialog = (): Promise<MatDialogHarness> => vi.waitFor(() => outside.getHarness(MatDialogHarness), 5_000);
  const because = async (reason: string): Promise<void> =>
    (await outside.getHarness(MatInputHarness.with({ ancestor: 'mat-dialog-container' }))).setValue(reason);
  const press = async (text: string, ancestor?: string): Promise<void> =>
    (await outside.getHarness(MatButtonHarness.with({ text, ...(ancestor && { ancestor }) }))).click();

  beforeEach(() => {
    TestBed.configureTestingModule({
      providers: [provideHttpClient(withInterceptors([problemInterceptor])), provideHttpClientTesting(), provideIcons(), provideRouter([])],
    });
    server = TestBed.inject(HttpTestingController);
    fixture = TestBed.createComponent(QualityPage);
    outside = TestbedHarnessEnvironment.documentRootLoader(fixture);
    fixture.componentRef.setInput('modelId', 'm1');
    fixture.componentRef.setInput('sampleId', 's1');
    fixture.detectChanges();
  });

  it('shows the report, and first the column that waits for an answer', async () => {
    expect(await open()).toBe('fee');
    expect(shown()).toContain('1 flag waits for an answer.');
    expect(shown()).toContain('for definition 2');
    expect(shown()).toContain('No column has the role of the application date');
    const [, fee] = [...page().querySelectorAll('ts-table tbody tr')];
    expect(fee.querySelector('button')?.getAttribute('aria-pressed')).toBe('true');
    expect(fee.textContent).toContain('25.0');
  });

  it('sends an answer with its reason and shows what then stands', async () => {
    await open();
    await press('Accept', 'li');
    expect(await (await dialog()).getTitleText()).toBe('Accept this flag?');
    await because('Known when applying.');
    await press('Accept', 'mat-dialog-container');
    await settled();
    const request = await vi.waitUntil(() => server.match(`${address}/quality/answers`).at(0));
    expect(request.request.body).toEqual({ column: 'fee', code: 'leakage-value', answer: 'accepted', reason: 'Known when applying.' });
    const answer = { answer: 'accepted', reason: 'Known when applying.', by: 'Marian', at: '2026-11-04T10:00:00Z' } as const;
    const finding = '2 400 rows and 2 columns; no flag waits for an answer.';
    request.flush({ ...state, finding, report: { ...report, finding, flags: [{ ...flag, answer }] } });
    await settled();
    expect(shown()).toContain('Accepted: Known when applying.');
    expect(shown()).toContain(finding);
  });

  it('says why an answer was refused, and keeps the flag open', async () => {
    await open();
    await press('Not used');
    expect(await (await dialog()).getTitleText()).toBe('Leave fee out?');
    await because('Charged afterwards.');
    await press('Not used', 'mat-dialog-container');
    await settled();
    const request = await vi.waitUntil(() => server.match(`${address}/quality/answers`).at(0));
    request.flush({ title: 'Invalid', status: 422, code: 'no-such-flag', detail: 'The report raises no such flag.' }, { status: 422, statusText: 'Unprocessable' });
    await settled();
    expect(shown()).toContain('The report raises no such flag.');
    expect(page().querySelector('li.waits')).not.toBeNull();
  });

  it('prints the figures of every flagged column that takes part, and then shows the chosen one again', async () => {
    const more = { ...report, columns: [...report.columns, column('age'), column('note', { role: 'not used' })] };
    const raised = (name: string): QualityFlag => ({ ...flag, column: name });
    await open({ report: { ...more, flags: [flag, raised('age'), raised('note'), { ...raised('income'), weight: 'note' }] } });
    const titles = (): (string | undefined)[] =>
      [...page().querySelectorAll('ts-column-quality:not(.ts-no-print) ts-quality-groups')].map((part) => /fee|age|income|note/.exec(part.textContent)?.[0]);
    const printed: (string | undefined)[] = [];
    const print = vi.spyOn(globalThis, 'print').mockImplementation(() => void printed.push(...titles()));
    await press('Print');
    for (const name of ['fee', 'age']) {
      const asked = await vi.waitUntil(() => server.match(({ url, params }) => url === `${address}/quality/column` && params.get('column') === name).at(0));
      asked.flush({ ...column(name), groups: [], histogram: null, months: [] });
    }
    await vi.waitFor(() => {
      fixture.detectChanges();
      expect(print).toHaveBeenCalledOnce();
    });
    expect(printed).toEqual(['fee', 'age']);
    await settled();
    expect(titles()).toEqual(['fee']);
    print.mockRestore();
  });

  it('offers no answer to those who only read', async () => {
    await open({ abilities: [] });
    expect(await outside.getAllHarnesses(MatButtonHarness.with({ text: /^(Accept|Not used)$/ }))).toEqual([]);
  });

  it('says what is missing where there is no report, and makes one', async () => {
    const finding = 'No report was made for this definition yet.';
    expect(await open({ report: null, finding, abilities: ['make'] })).toBeNull();
    expect(shown()).toContain(finding);
    await press('Make the report');
    const request = server.expectOne({ method: 'POST', url: `${address}/quality` });
    expect(request.request.headers.get('Idempotency-Key')).toBeTruthy();
    request.flush({ title: 'Busy', status: 409, code: 'busy', detail: 'It is made already.' }, { status: 409, statusText: 'Conflict' });
    await settled();
    expect(shown()).toContain('It is made already.');
  });

  it('says of a file that has not been read that it has not, with the way to its reading', async () => {
    server.expectOne(address).flush({ id: 's1', modelId: 'm1', fileName: 'applicants.csv', rows: null, erased: null });
    server.expectOne(`${address}/quality`).flush({ ...state, report: null, definitionId: null, finding: 'The report needs a confirmed definition.', abilities: [] });
    await settled();
    expect(page().querySelector('ts-empty .title')?.textContent).toBe('The file has not been read yet');
    expect(page().querySelector('ts-empty a')?.getAttribute('href')).toBe('/models/m1/sample/s1/reading');
    expect(shown()).not.toContain('The report needs a confirmed definition.');
  });

  it('says that the report could not be read', async () => {
    for (const path of ['', '/quality'])
      server.expectOne(`${address}${path}`).flush({ title: 'Gone', status: 404, code: 'not-found', detail: 'There is no such sample.' }, { status: 404, statusText: 'Not found' });
    await settled();
    expect(shown()).toContain('There is no such sample.');
    expect(await (await outside.getHarness(MatButtonHarness.with({ text: 'Try again' }))).isDisabled()).toBe(false);
  });
});
