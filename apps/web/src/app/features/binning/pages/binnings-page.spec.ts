import { provideHttpClient, withInterceptors } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { TestBed } from '@angular/core/testing';
import { provideRouter, withComponentInputBinding } from '@angular/router';
import { RouterTestingHarness } from '@angular/router/testing';
import type { BinningSummary } from '@tallystone/contracts/binnings/schema';
import { problemInterceptor } from '../../../core/http/interceptors';
import { provideIcons } from '../../../ui/register-icons';
import { firstBinning } from '../testing/binnings';
import { BinningsPage } from './binnings-page';

describe('BinningsPage', () => {
  let harness: RouterTestingHarness;
  let server: HttpTestingController;

  async function open(binnings: Partial<BinningSummary>[]): Promise<void> {
    await harness.navigateByUrl('/models/m1/binning', BinningsPage);
    server
      .expectOne('/api/models/m1/binnings')
      .flush({ binnings: binnings.map((one) => ({ ...firstBinning, ...one })), abilities: ['start-binning'] });
    await new Promise((resolve) => setTimeout(resolve));
    harness.detectChanges();
  }
  const page = (): HTMLElement => harness.routeNativeElement!;
  const shown = (): string => page().textContent?.replace(/\s+/g, ' ') ?? '';
  const links = (): (string | null)[] => [...page().querySelectorAll('tbody a')].map((link) => link.getAttribute('href'));

  beforeEach(async () => {
    TestBed.configureTestingModule({
      providers: [
        provideHttpClient(withInterceptors([problemInterceptor])),
        provideHttpClientTesting(),
        provideIcons(),
        provideRouter([{ path: 'models/:modelId/binning', component: BinningsPage }], withComponentInputBinding()),
      ],
    });
    server = TestBed.inject(HttpTestingController);
    harness = await RouterTestingHarness.create();
  });

  it('leads to binnings that are there and to those that say why they are not, and not to one under way', async () => {
    await open([
      { id: 'b3', name: 'Third', state: 'classing' },
      { id: 'b2', name: 'Second', state: 'failed' },
      { id: 'b1', state: 'ready' },
    ]);
    expect(links()).toEqual(['/models/m1/binning/b2', '/models/m1/binning/b1']);
    expect(shown()).toContain('First binning takes 3 characteristics of 4, with no manual edit.');
    expect(shown()).toContain('Did not finish');
  });

  it('does not speak of work under way where all that was started has failed', async () => {
    await open([{ state: 'failed' }]);
    expect(shown()).toContain('No binning has its characteristics classed yet.');
    expect(shown()).not.toContain('are being classed');
  });
});
