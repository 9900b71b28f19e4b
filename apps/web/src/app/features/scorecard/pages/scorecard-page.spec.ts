import { provideHttpClient, withInterceptors } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { ChangeDetectionStrategy, Component } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { MatButtonHarness } from '@angular/material/button/testing';
import { MatInputHarness } from '@angular/material/input/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { provideRouter, withComponentInputBinding, withRouterConfig } from '@angular/router';
import { RouterTestingHarness } from '@angular/router/testing';
import { problemInterceptor } from '../../../core/http/interceptors';
import { provideIcons } from '../../../ui/register-icons';
import { smallScorecard } from '../testing/scorecard';
import { ScorecardPage } from './scorecard-page';

@Component({ selector: 'ts-elsewhere', changeDetection: ChangeDetectionStrategy.OnPush, template: 'elsewhere' })
class Elsewhere {}

const url = `/api/fits/${smallScorecard.fitId}/scorecard`;

describe('ScorecardPage', () => {
  let server: HttpTestingController;
  let harness: RouterTestingHarness;
  const page = (): HTMLElement => harness.routeNativeElement as HTMLElement;
  const loader = () => TestbedHarnessEnvironment.loader(harness.fixture);

  async function settled(): Promise<void> {
    await new Promise((resolve) => setTimeout(resolve));
    await harness.fixture.whenStable();
  }

  beforeEach(async () => {
    TestBed.configureTestingModule({
      providers: [
        provideHttpClient(withInterceptors([problemInterceptor])),
        provideHttpClientTesting(),
        provideIcons(),
        provideRouter(
          [
            { path: 'models/:modelId/scorecard', component: ScorecardPage },
            { path: '**', component: Elsewhere },
          ],
          withComponentInputBinding(),
          withRouterConfig({ paramsInheritanceStrategy: 'always' }),
        ),
      ],
    });
    server = TestBed.inject(HttpTestingController);
    harness = await RouterTestingHarness.create();
    const opening = harness.navigateByUrl(`/models/m1/scorecard?fit=${smallScorecard.fitId}`);
    await new Promise((resolve) => setTimeout(resolve));
    harness.fixture.detectChanges();
    server.expectOne('/api/models/m1/fits').flush({ fits: [], abilities: [] });
    server.expectOne(url).flush(smallScorecard, { headers: { ETag: '"2"' } });
    await opening;
    await settled();
  });

  const press = async (text: string): Promise<void> => (await loader().getAllHarnesses(MatButtonHarness.with({ text })))[0].click();
  const field = async (name: string): Promise<MatInputHarness> => loader().getHarness(MatInputHarness.with({ selector: `[formControlName=${name}]` }));

  it('opens with its sentence, and points follow what is typed before it is saved', async () => {
    expect(page().textContent).toContain('age can decide most, with 28 points');
    const points = (): (string | undefined)[] => [...page().querySelectorAll('ts-points-list td.strong')].map((cell) => cell.textContent?.trim());
    expect(points()).toEqual(['\u221214', '14', '6', '\u22126']);
    await (await field('pointsToDouble')).setValue('40');
    expect(points()).toEqual(['\u221229', '29', '12', '\u221212']);
  });

  it('saves against the state that was read', async () => {
    await (await field('baseScore')).setValue('650');
    await press('Save');
    const request = server.expectOne({ method: 'PUT', url });
    expect(request.request.headers.get('If-Match')).toBe('"2"');
    expect(request.request.body.scaling.baseScore).toBe(650);
    expect(request.request.body.reasons.texts).toEqual(smallScorecard.settings.reasons.texts);
    request.flush({ ...smallScorecard, settings: request.request.body, revision: 3 }, { headers: { ETag: '"3"' } });
    await settled();
    expect(page().textContent).not.toContain('Discard changes');
  });

  it('asks which stays when someone else saved first, and overwrites only then', async () => {
    await (await field('baseScore')).setValue('650');
    await press('Save');
    server.expectOne({ method: 'PUT', url }).flush({ title: 'Stale', code: 'stale', problems: [] }, { status: 412, statusText: 'Precondition Failed' });
    await new Promise((resolve) => setTimeout(resolve));
    server.expectOne({ method: 'GET', url }).flush({ ...smallScorecard, revision: 3 }, { headers: { ETag: '"3"' } });
    await settled();
    expect(page().textContent).toContain('Someone else saved this scorecard meanwhile');
    await press('Save mine');
    const again = server.expectOne({ method: 'PUT', url });
    expect(again.request.headers.get('If-Match')).toBe('"3"');
    expect(again.request.body.scaling.baseScore).toBe(650);
  });
});
