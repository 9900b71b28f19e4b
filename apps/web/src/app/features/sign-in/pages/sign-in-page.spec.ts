import { type HarnessLoader } from '@angular/cdk/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { provideHttpClient, withInterceptors } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { ChangeDetectionStrategy, Component } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { MatButtonHarness } from '@angular/material/button/testing';
import { MatFormFieldHarness } from '@angular/material/form-field/testing';
import { MatInputHarness } from '@angular/material/input/testing';
import { Router, provideRouter, withComponentInputBinding } from '@angular/router';
import { RouterTestingHarness } from '@angular/router/testing';
import { problemInterceptor, signedOutInterceptor } from '../../../core/http/interceptors';
import { SignInPage } from './sign-in-page';

@Component({ changeDetection: ChangeDetectionStrategy.OnPush, template: 'elsewhere' })
class Elsewhere {}

const nobody = { user: null, abilities: [], demo: false };
const somebody = { ...nobody, user: { id: 'a', name: 'Modeller', email: 'modeller@saltmarsh.example', roles: ['modeller'] } };

describe('SignInPage', () => {
  let server: HttpTestingController;
  let loader: HarnessLoader;
  let router: RouterTestingHarness;

  async function open(url: string): Promise<void> {
    TestBed.configureTestingModule({
      providers: [
        provideHttpClient(withInterceptors([problemInterceptor, signedOutInterceptor])),
        provideHttpClientTesting(),
        provideRouter(
          [
            { path: 'sign-in', component: SignInPage },
            { path: '**', component: Elsewhere },
          ],
          withComponentInputBinding(),
        ),
      ],
    });
    server = TestBed.inject(HttpTestingController);
    router = await RouterTestingHarness.create(url);
    server.expectOne({ method: 'GET', url: '/api/session' }).flush(nobody);
    server.expectOne('/api/set-up').flush({ open: false });
    loader = TestbedHarnessEnvironment.loader(router.fixture);
    await router.fixture.whenStable();
  }

  async function submit(email: string, password: string): Promise<void> {
    await (await loader.getHarness(MatInputHarness.with({ selector: '[type=email]' }))).setValue(email);
    await (await loader.getHarness(MatInputHarness.with({ selector: '[type=password]' }))).setValue(password);
    await (await loader.getHarness(MatButtonHarness.with({ text: 'Sign in' }))).click();
  }

  /** The page's promises go on after the answer, one after the other; then Angular draws. */
  async function settled(): Promise<void> {
    await new Promise((resolve) => setTimeout(resolve));
    await router.fixture.whenStable();
  }

  const text = (): string => router.routeNativeElement?.textContent ?? '';

  it('goes back to the page that asked for it', async () => {
    await open('/sign-in?next=%2Frecord%3Faction%3Dmodel.edited');
    await submit('modeller@saltmarsh.example', 'salt and marsh and tide');
    const request = server.expectOne({ method: 'POST', url: '/api/session' });
    expect(request.request.body).toEqual({ email: 'modeller@saltmarsh.example', password: 'salt and marsh and tide' });
    request.flush(somebody);
    await settled();
    expect(TestBed.inject(Router).url).toBe('/record?action=model.edited');
  });

  it.each(['https://elsewhere.example', '//elsewhere.example', '/\\elsewhere.example'])('never leaves for %s', async (next) => {
    await open(`/sign-in?next=${encodeURIComponent(next)}`);
    await submit('modeller@saltmarsh.example', 'x');
    server.expectOne({ method: 'POST', url: '/api/session' }).flush(somebody);
    await settled();
    expect(TestBed.inject(Router).url).toBe('/models');
  });

  it('says what is wrong, keeps the address and forgets the password', async () => {
    await open('/sign-in');
    await submit('modeller@saltmarsh.example', 'wrong');
    server
      .expectOne({ method: 'POST', url: '/api/session' })
      .flush(
        { title: 'Not signed in', code: 'wrong', detail: 'E-mail address or password is wrong.', problems: [] },
        { status: 401, statusText: '' },
      );
    await settled();
    expect(text()).toContain('E-mail address or password is wrong.');
    expect(await (await loader.getHarness(MatInputHarness.with({ selector: '[type=email]' }))).getValue()).toBe(
      'modeller@saltmarsh.example',
    );
    expect(await (await loader.getHarness(MatInputHarness.with({ selector: '[type=password]' }))).getValue()).toBe('');
  });

  it('asks for what is missing before it asks the server', async () => {
    await open('/sign-in');
    await submit('not an address', '');
    server.expectNone({ method: 'POST', url: '/api/session' });
    const fields = await loader.getAllHarnesses(MatFormFieldHarness);
    expect((await Promise.all(fields.map((field) => field.getTextErrors()))).flat()).toEqual([
      'Give the e-mail address of your account.',
      'Give your password.',
    ]);
  });
});
