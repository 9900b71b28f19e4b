import { provideHttpClient, withInterceptors } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { TestBed } from '@angular/core/testing';
import { provideRouter, withComponentInputBinding } from '@angular/router';
import { RouterTestingHarness } from '@angular/router/testing';
import type { CharacteristicDetail } from '@tallystone/contracts/binnings/schema';
import { problemInterceptor } from '../../../core/http/interceptors';
import { provideIcons } from '../../../ui/register-icons';
import { firstBinning, listOf } from '../testing/binnings';
import { home, utilisation } from '../testing/characteristics';
import { BenchPage } from './bench-page';

/** The same with values in thousands, as amounts have them. */
const amount: CharacteristicDetail = {
  ...utilisation,
  column: 'amount',
  current: { kind: 'numeric', edges: [20_000, 40_000], special: ['own'], missing: 'own' },
  automatic: { kind: 'numeric', edges: [20_000, 40_000], special: ['own'], missing: 'own' },
  fine: { ...utilisation.fine, edges: utilisation.fine.edges.map((edge) => 1000 * edge), range: [0, 100_000] },
};

describe('the page of one characteristic', () => {
  let harness: RouterTestingHarness;
  let server: HttpTestingController;
  let url: string;

  async function settled(): Promise<void> {
    await new Promise((resolve) => setTimeout(resolve));
    harness.detectChanges();
  }
  async function open(of: CharacteristicDetail): Promise<void> {
    url = `/api/binnings/b1/characteristics/${of.id}`;
    await harness.navigateByUrl(`/models/m1/binning/b1/${of.id}`, BenchPage);
    await settled();
    server.expectOne('/api/binnings/b1').flush(firstBinning);
    server.expectOne('/api/binnings/b1/characteristics').flush(listOf([]));
    server.expectOne(url).flush(of, { headers: { ETag: '"3"' } });
    await settled();
    server.expectOne('/api/sample-definitions/d1/labels').flush({ labels: [] });
    server.expectOne(`${url}/months`).flush({ dateColumn: null, development: [], holdOut: [], undated: 0, outOfTime: null });
    await settled();
  }
  const page = (): HTMLElement => harness.routeNativeElement!;
  const words = (element: Element | null): string | undefined => element?.textContent?.replace(/[ \n]+/g, ' ').trim();
  const press = async (text: string): Promise<void> => {
    [...page().querySelectorAll('button')].find((button) => words(button) === text)!.click();
    await settled();
  };

  beforeEach(async () => {
    TestBed.configureTestingModule({
      providers: [
        provideHttpClient(withInterceptors([problemInterceptor])),
        provideHttpClientTesting(),
        provideIcons(),
        provideRouter(
          [{ path: 'models/:modelId/binning/:binningId/:characteristicId', component: BenchPage }],
          withComponentInputBinding(),
        ),
      ],
    });
    server = TestBed.inject(HttpTestingController);
    harness = await RouterTestingHarness.create();
  });

  describe('a cut that cannot be where it was typed', () => {
    const type = async (value: string): Promise<void> => {
      const field = page().querySelector<HTMLInputElement>('input[type=number]')!;
      field.value = value;
      field.dispatchEvent(new Event('input', { bubbles: true }));
      await settled();
    };
    const add = async (value: string): Promise<void> => {
      await type(value);
      await press('Add');
    };
    const alerts = (): (string | undefined)[] => [...page().querySelectorAll('[role=alert]')].map(words);

    it('is told beside the field in one plain sentence', async () => {
      await open(amount);
      await add('40000');
      expect(alerts()).toEqual(['There is a cut at 40\u202F000 already.']);
      expect(page().querySelector('form [role=alert]')).not.toBeNull();
      // Gone as soon as something else is typed.
      await type('41000');
      expect(alerts()).toEqual([]);
    });

    it('is told once where the server says it, without the name of a field or a request', async () => {
      await open(amount);
      await add('120000');
      const message = 'A cut at 120000 would leave a bin without a value. Development has values from 0 to 100000.';
      server.expectOne({ method: 'POST', url: `${url}/fine-edges` }).flush(
        {
          title: 'The input has a problem',
          status: 422,
          code: 'invalid',
          detail: message,
          problems: [{ code: 'separates-nothing', message, where: { field: 'edge' } }],
          requestId: 'r-1',
        },
        { status: 422, statusText: 'Unprocessable' },
      );
      await settled();
      expect(alerts()).toEqual([
        'A cut at 120\u202F000 would leave a bin without a value. Development has values from 0 to 100\u202F000.',
      ]);
      expect(page().querySelector('form [role=alert]')).not.toBeNull();
    });

    it('keeps what the server says of anything else', async () => {
      await open(amount);
      await add('41000');
      server
        .expectOne({ method: 'POST', url: `${url}/fine-edges` })
        .flush({ title: 'The rows are erased', status: 409, code: 'erased' }, { status: 409, statusText: 'Conflict' });
      await settled();
      expect(alerts()).toEqual(['The rows are erased']);
      expect(page().querySelector('form [role=alert]')).toBeNull();
    });
  });

  it('says what was refused of a save and what can be done', async () => {
    await open(amount);
    page()
      .querySelector('[role=slider]')!
      .dispatchEvent(new KeyboardEvent('keydown', { key: 'ArrowRight', bubbles: true, cancelable: true }));
    await settled();
    expect(words(page().querySelector('ts-edit-list .what'))).toBe('Cut moved from 20\u202F000 to 30\u202F000');
    const save = await vi.waitUntil(() => server.match({ method: 'PUT', url }).at(0), 5000);
    save.flush({ title: 'This binning is of an erased sample', code: 'erased' }, { status: 409, statusText: 'Conflict' });
    await settled();
    expect(words(page().querySelector('.saved'))).toBe('Not saved; your edits are kept here');
    expect(words(page().querySelector('ts-problems [role=alert]'))).toContain('This binning is of an erased sample');
    expect(words(page().querySelector('ts-problems [role=alert]'))).toContain('No edit is lost');
    await press('Save again');
    server.expectOne({ method: 'PUT', url }).flush({ ...amount, revision: 4 }, { headers: { ETag: '"4"' } });
    await settled();
    await settled();
    expect(words(page().querySelector('.saved'))).toMatch(/^Saved /);
    expect(page().querySelector('[role=alert]')).toBeNull();
  });

  it('names the categories that are chosen, some dozen of them', async () => {
    const jobs = Array.from({ length: 15 }, (_, place) => `Job of kind ${place + 1}`);
    const counts = (many: number): number[] => [...Array<number>(jobs.length).fill(many), 0, 0];
    const groups = jobs.map((job) => [job]);
    await open({
      ...home,
      current: { ...home.current, kind: 'categorical', groups, unseen: 'neutral' },
      automatic: { ...home.automatic, kind: 'categorical', groups, unseen: 'neutral' },
      fine: {
        ...home.fine,
        categories: jobs,
        development: { rows: counts(100), goods: counts(80), bads: counts(20) },
        holdOut: { rows: counts(50), goods: counts(40), bads: counts(10) },
      },
    });
    const choose = async (name: string): Promise<void> => {
      page()
        .querySelector(`[data-category="${name}"]`)!
        .dispatchEvent(new KeyboardEvent('keydown', { key: ' ', bubbles: true, cancelable: true }));
      await settled();
    };
    await choose(jobs[3]);
    await choose(jobs[1]);
    expect(words(page().querySelector('.chosen-names'))).toBe('2 categories chosen: Job of kind 4, Job of kind 2');
    for (const job of jobs) if (job !== jobs[3] && job !== jobs[1]) await choose(job);
    expect(words(page().querySelector('.chosen-names'))).toMatch(
      /^15 categories chosen: Job of kind 4, Job of kind 2, .*Job of kind 12 and 3 more$/,
    );
  });
});
