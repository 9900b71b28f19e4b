import { provideHttpClient, withInterceptors } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { TestBed } from '@angular/core/testing';
import { MatButtonHarness } from '@angular/material/button/testing';
import { MatInputHarness } from '@angular/material/input/testing';
import { provideRouter, withComponentInputBinding } from '@angular/router';
import { RouterTestingHarness } from '@angular/router/testing';
import type { Version } from '@tallystone/contracts/versions/schema';
import { problemInterceptor } from '../../../core/http/interceptors';
import { provideIcons } from '../../../ui/register-icons';
import { frozen } from '../testing/version';
import { VersionPage } from './version-page';

const texts = '/api/versions/v1/texts';

describe('VersionPage', () => {
  let server: HttpTestingController;
  let harness: RouterTestingHarness;
  const page = (): HTMLElement => harness.routeNativeElement as HTMLElement;
  const loader = () => TestbedHarnessEnvironment.loader(harness.fixture);

  async function settled(): Promise<void> {
    await new Promise((resolve) => setTimeout(resolve));
    await harness.fixture.whenStable();
  }

  async function open(version: Version, abilities: string[] = ['edit']): Promise<void> {
    harness = await RouterTestingHarness.create();
    const opening = harness.navigateByUrl('/models/m1/version/v1');
    await new Promise((resolve) => setTimeout(resolve));
    harness.fixture.detectChanges();
    server.expectOne('/api/versions/v1').flush(version);
    await new Promise((resolve) => setTimeout(resolve));
    harness.fixture.detectChanges();
    await new Promise((resolve) => setTimeout(resolve));
    server
      .expectOne(texts)
      .flush({ texts: { limitations: 'One sample' }, revision: 1, changedBy: 'Marian', changedAt: '2026-11-03T13:00:00Z', abilities }, { headers: { ETag: '"1"' } });
    await opening;
    await settled();
  }

  beforeEach(() => {
    TestBed.configureTestingModule({
      providers: [
        provideHttpClient(withInterceptors([problemInterceptor])),
        provideHttpClientTesting(),
        provideIcons(),
        provideRouter([{ path: 'models/:modelId/version/:versionId', component: VersionPage }], withComponentInputBinding()),
      ],
    });
    server = TestBed.inject(HttpTestingController);
  });

  const button = (text: string): Promise<MatButtonHarness> => loader().getHarness(MatButtonHarness.with({ text }));
  const text = (key: string): Promise<MatInputHarness> => loader().getHarness(MatInputHarness.with({ selector: `textarea[rows]`, label: new RegExp(key) }));

  it('says what is missing, links to where it is put right, and holds the act back', async () => {
    await open(frozen);
    expect(page().textContent).toContain('2 things are missing before it can go on');
    expect(page().querySelector('ts-gate-list a')?.getAttribute('href')).toBe('/models/m1/scorecard?fit=f1');
    expect(await (await button('Submit for validation')).isDisabled()).toBe(true);
  });

  it('says so at its head once its rows were erased', async () => {
    const erased = { sample: 1, fileName: 'applicants.csv', at: '2026-12-02T10:00:00Z', by: 'Ada', reason: 'Retention has ended' };
    await open({ ...frozen, erased });
    expect(page().querySelector('.state')?.textContent).toContain('No longer replicable');
    expect(page().querySelector('ts-tombstone')?.textContent).toContain(
      'No longer replicable: the rows of sample 1, applicants.csv, were erased on 2026-12-02 by Ada. Reason: Retention has ended.',
    );
  });

  it('shows why an act is not open to this person', async () => {
    await open({ ...frozen, state: 'Submitted', abilities: [], refusals: { start: 'You took part in developing this version: someone else has to validate it.' } }, []);
    expect(page().textContent).toContain('someone else has to validate it');
    expect(page().querySelector('ts-decision')).toBeNull();
    expect(page().querySelector('textarea')).toBeNull();
  });

  it('merges what someone else wrote elsewhere, and saves both', async () => {
    await open(frozen);
    await (await text('Monitoring plan')).setValue('Each quarter');
    expect((harness.routeDebugElement!.componentInstance as VersionPage).unsaved()).toBe(true);
    await (await button('Save texts')).click();
    server.expectOne({ method: 'PUT', url: texts }).flush({ title: 'Stale', code: 'stale', problems: [] }, { status: 412, statusText: 'Precondition Failed' });
    await new Promise((resolve) => setTimeout(resolve));
    server
      .expectOne({ method: 'GET', url: texts })
      .flush({ texts: { limitations: 'One sample', recommendation: 'Use it' }, revision: 2, changedBy: 'Mo', changedAt: '2026-11-03T14:00:00Z', abilities: ['edit'] }, { headers: { ETag: '"2"' } });
    await new Promise((resolve) => setTimeout(resolve));
    const again = server.expectOne({ method: 'PUT', url: texts });
    expect(again.request.headers.get('If-Match')).toBe('"2"');
    expect(again.request.body).toEqual({ limitations: 'One sample', recommendation: 'Use it', monitoringPlan: 'Each quarter' });
  });

  it('asks where both changed the same section', async () => {
    await open(frozen);
    await (await text('Limitations')).setValue('Mine');
    await (await button('Save texts')).click();
    server.expectOne({ method: 'PUT', url: texts }).flush({ title: 'Stale', code: 'stale', problems: [] }, { status: 412, statusText: 'Precondition Failed' });
    await new Promise((resolve) => setTimeout(resolve));
    server.expectOne({ method: 'GET', url: texts }).flush({ texts: { limitations: 'Theirs' }, revision: 2, changedBy: 'Mo', changedAt: null, abilities: ['edit'] }, { headers: { ETag: '"2"' } });
    await settled();
    expect(await (await button('Save texts')).isDisabled()).toBe(true);
    await (await button('Take theirs')).click();
    expect(await (await text('Limitations')).getValue()).toBe('Theirs');
    expect(await (await button('Save texts')).isDisabled()).toBe(false);
  });
});
