import type { HarnessLoader } from '@angular/cdk/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { provideHttpClient, withInterceptors } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { MatButtonHarness } from '@angular/material/button/testing';
import { MatCheckboxHarness } from '@angular/material/checkbox/testing';
import { MatInputHarness } from '@angular/material/input/testing';
import { MatRadioButtonHarness } from '@angular/material/radio/testing';
import { Router, provideRouter } from '@angular/router';
import type { FitBasis, NewFit } from '@tallystone/contracts/fits/schema';
import { problemInterceptor } from '../../../core/http/interceptors';
import { provideIcons } from '../../../ui/register-icons';
import { NewFitPage } from './new-fit-page';

const basis: FitBasis = {
  definitionId: 'd1',
  weight: null,
  groupKey: 'household',
  declined: { column: 'decision', values: ['declined'], rows: 6412 },
  badRate: 0.101,
};

describe('NewFitPage', () => {
  let fixture: ComponentFixture<NewFitPage>;
  let server: HttpTestingController;
  let loader: HarnessLoader;

  async function settled(): Promise<void> {
    await new Promise((resolve) => setTimeout(resolve));
    fixture.detectChanges();
  }
  async function open(binnings: readonly object[], answer: FitBasis = basis): Promise<void> {
    server.expectOne('/api/models/m1/binnings').flush({ binnings, abilities: [] });
    await settled();
    await settled();
    if (binnings.length === 0) return;
    server.expectOne('/api/binnings/b1/characteristics').flush({
      characteristics: [
        { column: 'age', included: true, informationValue: 0.214 },
        { column: 'term', included: false, informationValue: 0.01 },
        { column: 'home', included: true, informationValue: 0.08 },
      ],
    });
    server.expectOne('/api/sample-definitions/d1/fit-basis').flush(answer);
    await settled();
    await settled();
  }
  const binning = { id: 'b1', number: 1, name: 'First', state: 'ready', erased: null, definitionId: 'd1' };
  const page = (): HTMLElement => fixture.nativeElement as HTMLElement;
  const shown = (): string => page().textContent?.replace(/\s+/g, ' ') ?? '';
  const field = (name: string): Promise<MatInputHarness> => loader.getHarness(MatInputHarness.with({ selector: `[formControlName=${name}]` }));
  const fit = async (): Promise<void> => (await loader.getHarness(MatButtonHarness.with({ text: 'Fit the path' }))).click();
  const pick = async (label: RegExp): Promise<void> => (await loader.getHarness(MatRadioButtonHarness.with({ label }))).check();
  const sent = (): { settings: NewFit['settings']; key: string | null; refuse: (detail: string) => void; take: () => void } => {
    const asked = server.expectOne({ method: 'POST', url: '/api/models/m1/fits' });
    return {
      settings: (asked.request.body as NewFit).settings,
      key: asked.request.headers.get('Idempotency-Key'),
      refuse: (detail) => asked.flush({ title: 'Invalid', status: 422, code: 'invalid', detail, problems: [] }, { status: 422, statusText: 'Unprocessable' }),
      take: () => asked.flush({ id: 'f1' }, { headers: { ETag: '"1"' } }),
    };
  };

  beforeEach(() => {
    TestBed.configureTestingModule({
      providers: [provideHttpClient(withInterceptors([problemInterceptor])), provideHttpClientTesting(), provideIcons(), provideRouter([])],
    });
    server = TestBed.inject(HttpTestingController);
    fixture = TestBed.createComponent(NewFitPage);
    loader = TestbedHarnessEnvironment.loader(fixture);
    fixture.componentRef.setInput('modelId', 'm1');
    fixture.detectChanges();
  });

  it('says where to go while nothing can be fitted', async () => {
    await open([]);
    expect(shown()).toContain('No binning to fit on');
    expect(page().querySelector('form')).toBeNull();
  });

  it('shows the characteristics that the binning includes, and what the sample gives', async () => {
    await open([binning]);
    expect([...page().querySelectorAll('tbody tr')].map((row) => [...row.children].slice(0, 2).map((cell) => cell.textContent?.trim()))).toEqual([
      ['age', '0.21'],
      ['home', '0.08'],
    ]);
    expect(shown()).toContain('2 characteristics of this binning enter the fit.');
    expect(shown()).toContain('6 412 applicants are declined by decision (declined)');
    expect(shown()).toContain('Rows of one household stay in one fold.');
  });

  it('starts what is entered and nothing more, and goes to the fit', async () => {
    await open([binning]);
    await (await field('name')).setValue('Net');
    await pick(/^Elastic net/);
    await (await field('mixing')).setValue('0.25');
    const select = page().querySelector('select')!;
    select.value = 'always kept';
    select.dispatchEvent(new Event('change'));
    await settled();
    await (await loader.getHarness(MatCheckboxHarness.with({ label: /^Constrain every sign/ }))).check();
    await fit();
    expect(shown()).toContain('Some entries want a correction');
    server.expectNone({ method: 'POST' });
    const reason = page().querySelector<HTMLInputElement>('input.reason')!;
    expect(reason.getAttribute('aria-invalid')).toBe('true');
    reason.value = 'Underwriters expect it';
    reason.dispatchEvent(new Event('input'));
    await fit();
    const { settings, take } = sent();
    expect(settings).toMatchObject({ name: 'Net', mixing: 0.25, priorCorrection: null });
    expect(settings.declined).toBeUndefined();
    expect(settings.characteristics).toEqual([
      { column: 'age', treatment: 'always kept', signConstraint: true, reason: 'Underwriters expect it' },
      { column: 'home', treatment: 'free', signConstraint: true, reason: '' },
    ]);
    const go = vi.spyOn(TestBed.inject(Router), 'navigate').mockResolvedValue(true);
    take();
    await settled();
    expect(go).toHaveBeenCalledWith(['/models', 'm1', 'fit', 'f1']);
    expect(fixture.componentInstance.unsaved()).toBe(false);
  });

  it('asks for the reasons of inference and correction, with the caution, and tells them', async () => {
    await open([binning]);
    await (await field('name')).setValue('With the declined');
    await pick(/^Parcelling/);
    await (await field('uplift')).setValue('2');
    await (await loader.getHarness(MatCheckboxHarness.with({ label: /^Correct the intercept/ }))).check();
    await (await field('populationPercent')).setValue('4');
    expect(shown()).toContain('An accepts-only fit with the same settings is started with this one.');
    await fit();
    server.expectNone({ method: 'POST' });
    await (await field('declinedReason')).setValue('A third was declined');
    await (await field('correctionReason')).setValue('Portfolio of 2024');
    await fit();
    const { settings } = sent();
    expect(settings.declined).toEqual({ method: 'parcelling', bands: 10, uplift: 2, reason: 'A third was declined' });
    expect(settings.priorCorrection).toEqual({ populationBadRate: 0.04, reason: 'Portfolio of 2024' });
  });

  it('says why a fit was refused, keeps what was entered and tries again under another key', async () => {
    await open([binning], { ...basis, declined: null });
    expect(shown()).toContain('treats nobody as declined');
    await (await field('name')).setValue('Lasso');
    await fit();
    const first = sent();
    first.refuse('This fit cannot be started as it is.');
    await settled();
    expect(shown()).toContain('This fit cannot be started as it is.');
    expect(fixture.componentInstance.unsaved()).toBe(true);
    await fit();
    const second = sent();
    expect(second.settings.name).toBe('Lasso');
    expect(second.key).not.toBe(first.key);
  });
});
