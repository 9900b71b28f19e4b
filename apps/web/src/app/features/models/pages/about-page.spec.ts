import type { HarnessLoader } from '@angular/cdk/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { provideHttpClient, withInterceptors } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { MatButtonHarness } from '@angular/material/button/testing';
import { MatInputHarness } from '@angular/material/input/testing';
import { provideRouter } from '@angular/router';
import { CurrentModel, type Model } from '../../../core/current-model';
import { Session } from '../../../core/session';
import { problemInterceptor } from '../../../core/http/interceptors';
import { AboutPage } from './about-page';

const model: Model = {
  id: 'm1',
  inventoryNumber: 'M-0001',
  name: 'Personal loans, new customers',
  purpose: 'Accept or decline',
  product: 'Personal loan',
  population: 'New applicants',
  jurisdiction: 'Saltmarsh',
  owner: 'Credit',
  materialityTier: 1,
  intendedUse: '',
  prohibitedUse: '',
  state: 'In development',
  members: [{ personId: 'p1', name: 'Modeller', email: 'modeller@saltmarsh.example', addedAt: '2026-11-03T13:00:00Z' }],
  createdAt: '2026-11-03T13:00:00Z',
  createdBy: 'Modeller',
  updatedAt: '2026-11-03T13:00:00Z',
  revision: 3,
  abilities: ['edit'],
};

describe('AboutPage', () => {
  let fixture: ComponentFixture<AboutPage>;
  let server: HttpTestingController;
  let loader: HarnessLoader;

  async function settled(): Promise<void> {
    await new Promise((resolve) => setTimeout(resolve));
    await fixture.whenStable();
  }

  function answerModel(change: Partial<Model>, etag: string): void {
    server.expectOne({ method: 'GET', url: '/api/models/m1' }).flush({ ...model, ...change }, { headers: { ETag: etag } });
  }

  beforeEach(async () => {
    TestBed.configureTestingModule({
      providers: [provideHttpClient(withInterceptors([problemInterceptor])), provideHttpClientTesting(), provideRouter([])],
    });
    server = TestBed.inject(HttpTestingController);
    const session = TestBed.inject(Session).load();
    server.expectOne('/api/session').flush({ user: null, demo: false, abilities: ['models.read-content'] });
    await session;
    void TestBed.inject(CurrentModel).open('m1');
    answerModel({}, '"3"');
    server.expectOne('/api/models/m1/work').flush({ steps: [] });
    fixture = TestBed.createComponent(AboutPage);
    loader = TestbedHarnessEnvironment.loader(fixture);
    await settled();
  });

  const press = async (text: string): Promise<void> => (await loader.getHarness(MatButtonHarness.with({ text }))).click();
  const field = (name: string): Promise<MatInputHarness> =>
    loader.getHarness(MatInputHarness.with({ selector: `[formControlName=${name}]` }));
  const text = (): string => (fixture.nativeElement as HTMLElement).textContent ?? '';

  it('sends only what changed, against the state that was read', async () => {
    await press('Edit');
    await (await field('owner')).setValue('Head of retail credit');
    expect(fixture.componentInstance.unsaved()).toBe(true);
    await press('Save');
    const request = server.expectOne({ method: 'PATCH', url: '/api/models/m1' });
    expect(request.request.body).toEqual({ owner: 'Head of retail credit' });
    expect(request.request.headers.get('If-Match')).toBe('"3"');
    request.flush({ ...model, owner: 'Head of retail credit', revision: 4 }, { headers: { ETag: '"4"' } });
    await settled();
    answerModel({ owner: 'Head of retail credit', revision: 4 }, '"4"');
    server.expectOne('/api/models/m1/work').flush({ steps: [] });
    await settled();
    expect(fixture.componentInstance.unsaved()).toBe(false);
    expect(text()).toContain('Head of retail credit');
  });

  it('puts theirs and mine side by side when someone saved first, and takes over what only they changed', async () => {
    await press('Edit');
    await (await field('owner')).setValue('Mine');
    await press('Save');
    server
      .expectOne({ method: 'PATCH', url: '/api/models/m1' })
      .flush({ title: 'Stale', code: 'stale' }, { status: 412, statusText: '' });
    await settled();
    answerModel({ owner: 'Theirs', product: 'Loan', revision: 4 }, '"4"');
    await settled();
    expect(text()).toContain('Theirs: Theirs');
    expect(text()).toContain('Mine: Mine');
    expect(await (await field('product')).getValue()).toBe('Loan');
    await press('Keep mine');
    await press('Save');
    const request = server.expectOne({ method: 'PATCH', url: '/api/models/m1' });
    expect(request.request.body).toEqual({ owner: 'Mine' });
    expect(request.request.headers.get('If-Match')).toBe('"4"');
  });

  it('offers no edit without the ability', async () => {
    void TestBed.inject(CurrentModel).reload();
    answerModel({ abilities: [] }, '"3"');
    server.expectOne('/api/models/m1/work').flush({ steps: [] });
    await settled();
    expect(await loader.getAllHarnesses(MatButtonHarness.with({ text: 'Edit' }))).toHaveLength(0);
  });
});
