import { provideHttpClient, withInterceptors } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { TestBed } from '@angular/core/testing';
import { provideRouter, withComponentInputBinding } from '@angular/router';
import { RouterTestingHarness } from '@angular/router/testing';
import type { Binning, CharacteristicList } from '@tallystone/contracts/binnings/schema';
import { problemInterceptor } from '../../../core/http/interceptors';
import { provideIcons } from '../../../ui/register-icons';
import { firstBinning, listOf, listed } from '../testing/binnings';
import { CharacteristicsPage } from './characteristics-page';

const list = listOf([
  listed('age', { informationValue: 0.12, group: 1, position: 0 }),
  listed('utilisation', { informationValue: 0.41, position: 1 }),
  listed('months_known', { informationValue: 0.2, group: 1, position: 2 }),
]);
const address = '/models/m1/binning/b1';

describe('CharacteristicsPage', () => {
  let harness: RouterTestingHarness;
  let server: HttpTestingController;

  async function settled(): Promise<void> {
    await new Promise((resolve) => setTimeout(resolve));
    harness.detectChanges();
  }
  /** Opens the page and answers what it asks for. */
  async function open({
    of = list,
    binning = {},
    query = '',
  }: { of?: CharacteristicList; binning?: Partial<Binning>; query?: string } = {}): Promise<void> {
    await harness.navigateByUrl(`${address}${query}`, CharacteristicsPage);
    server.expectOne('/api/binnings/b1').flush({ ...firstBinning, ...binning });
    server.expectOne('/api/binnings/b1/characteristics').flush(of);
    await settled();
    await settled();
    server.expectOne('/api/sample-definitions/d1/labels').flush({ labels: [] });
    await settled();
  }
  const page = (): HTMLElement => harness.routeNativeElement!;
  const shown = (): string => page().textContent?.replace(/\s+/g, ' ') ?? '';

  beforeEach(async () => {
    TestBed.configureTestingModule({
      providers: [
        provideHttpClient(withInterceptors([problemInterceptor])),
        provideHttpClientTesting(),
        provideIcons(),
        provideRouter(
          [{ path: 'models/:modelId/binning/:binningId', component: CharacteristicsPage }],
          withComponentInputBinding(),
        ),
      ],
    });
    server = TestBed.inject(HttpTestingController);
    harness = await RouterTestingHarness.create();
  });

  describe('groups of what says the same', () => {
    const notice = (): HTMLElement | null => page().querySelector('ts-decision');
    const stale = { calculatedAt: '2026-03-01T10:05:00.000Z', changed: ['age'], runId: null };

    it('are said to be out of date once bins have changed, with the way to calculate them again', async () => {
      await open({ of: { ...list, correlations: stale } });
      expect(notice()?.textContent?.replace(/\s+/g, ' ')).toContain('age has changed since the correlations were calculated');
      expect(notice()?.querySelector('a')?.getAttribute('href')).toBe(`${address}/correlations`);
    });

    it('are said to be out of date to those who only read, without that way', async () => {
      await open({ of: { ...list, correlations: stale }, binning: { abilities: [] } });
      expect(shown()).toContain('age has changed since the correlations were calculated');
      expect(notice()?.querySelector('a')).toBeNull();
    });

    it('are not called out of date while they speak of the bins as they are, or are calculated', async () => {
      await open();
      expect(shown()).toContain('months_known');
      expect(notice()).toBeNull();
    });

    it('are not called out of date while they are calculated anew', async () => {
      await open({ of: { ...list, correlations: { ...stale, runId: 'r1' } } });
      expect(shown()).toContain('months_known');
      expect(notice()).toBeNull();
    });
  });
});
