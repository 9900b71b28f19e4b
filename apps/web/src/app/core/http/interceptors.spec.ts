import { HttpClient, provideHttpClient, withInterceptors } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { TestBed } from '@angular/core/testing';
import { Router, provideRouter } from '@angular/router';
import { firstValueFrom } from 'rxjs';
import { Session } from '../session';
import { isStale, readTagged, saveTagged } from './etag';
import { problemInterceptor, signedOutInterceptor } from './interceptors';
import { Problem } from './problem';

describe('requests', () => {
  let http: HttpClient;
  let server: HttpTestingController;

  beforeEach(() => {
    TestBed.configureTestingModule({
      providers: [
        provideHttpClient(withInterceptors([problemInterceptor, signedOutInterceptor])),
        provideHttpClientTesting(),
        provideRouter([]),
      ],
    });
    http = TestBed.inject(HttpClient);
    server = TestBed.inject(HttpTestingController);
  });

  afterEach(() => server.verify());

  async function signIn(): Promise<Session> {
    const session = TestBed.inject(Session);
    const loading = session.load();
    server.expectOne('/api/session').flush({
      user: { id: 'a', name: 'Modeller', email: 'modeller@saltmarsh.example', roles: ['modeller'] },
      abilities: ['models.read'],
      demo: false,
    });
    await loading;
    return session;
  }

  it('reject with a Problem', async () => {
    const failed = firstValueFrom(http.get('/api/models')).catch((error: unknown) => error);
    server.expectOne('/api/models').flush({ title: 'Nothing here', code: 'not-found' }, { status: 404, statusText: 'Not Found' });
    expect(await failed).toBeInstanceOf(Problem);
    expect(await failed).toMatchObject({ status: 404, code: 'not-found' });
  });

  it('take the person to sign-in when the session has ended', async () => {
    const session = await signIn();
    const navigate = vi.spyOn(TestBed.inject(Router), 'navigate').mockResolvedValue(true);
    const failed = firstValueFrom(http.get('/api/models')).catch((error: unknown) => error);
    server.expectOne('/api/models').flush(null, { status: 401, statusText: 'Unauthorized' });
    expect(await failed).toMatchObject({ status: 401 });
    expect(session.person()).toBeNull();
    expect(session.can('models.read')).toBe(false);
    expect(navigate).toHaveBeenCalledWith(['/sign-in'], { queryParams: { next: null, ended: '' } });
  });

  it('leave a wrong password on its page', async () => {
    const session = await signIn();
    const navigate = vi.spyOn(TestBed.inject(Router), 'navigate');
    const failed = session.signIn('modeller@saltmarsh.example', 'wrong').catch((error: unknown) => error);
    await Promise.resolve();
    server.expectOne({ method: 'POST', url: '/api/session' }).flush(null, { status: 401, statusText: 'Unauthorized' });
    expect(await failed).toMatchObject({ status: 401 });
    expect(navigate).not.toHaveBeenCalled();
    expect(session.person()?.name).toBe('Modeller');
  });

  it('send back the tag that was read, and know a stale save', async () => {
    const reading = firstValueFrom(readTagged<{ name: string }>(http, '/api/models/1'));
    server.expectOne('/api/models/1').flush({ name: 'A' }, { headers: { ETag: '"7"' } });
    const { value, etag } = await reading;
    expect(value.name).toBe('A');

    const saving = firstValueFrom(saveTagged(http, 'PATCH', '/api/models/1', { name: 'B' }, etag)).catch(
      (error: unknown) => error,
    );
    const request = server.expectOne({ method: 'PATCH', url: '/api/models/1' });
    expect(request.request.headers.get('If-Match')).toBe('"7"');
    request.flush({ title: 'Stale', code: 'stale' }, { status: 412, statusText: 'Precondition Failed' });
    expect(isStale(await saving)).toBe(true);
  });
});
