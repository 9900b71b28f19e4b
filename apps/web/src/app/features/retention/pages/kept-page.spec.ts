import { provideHttpClient, withInterceptors } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { MatButtonHarness } from '@angular/material/button/testing';
import { MatDialogHarness } from '@angular/material/dialog/testing';
import { MatInputHarness } from '@angular/material/input/testing';
import { provideRouter } from '@angular/router';
import type { KeptSample } from '@tallystone/contracts/samples/erasure';
import { problemInterceptor } from '../../../core/http/interceptors';
import { provideIcons } from '../../../ui/register-icons';
import { followsWords, keptFinding, restingWords } from '../ui/kept-words';
import { KeptPage } from './kept-page';

const sample: KeptSample = {
  id: 's1',
  number: 1,
  fileName: 'applicants.csv',
  size: 2_000_000,
  sha256: 'ab'.repeat(32),
  rows: 24_000,
  receivedAt: '2026-11-03T13:00:00Z',
  receivedFrom: 'Marian',
  definitions: 1,
  binnings: 2,
  fits: 0,
  versions: 1,
  runs: 0,
  erased: null,
  abilities: ['erase'],
};
const erased: KeptSample = {
  ...sample,
  erased: { sample: 1, fileName: 'applicants.csv', at: '2026-12-02T10:00:00Z', by: 'Ada', reason: 'Retention has ended.' },
  abilities: [],
};

describe('what is kept, in words', () => {
  it('counts rows kept and samples erased', () => {
    expect(keptFinding({ samples: [sample], uploads: [] })).toBe('1 sample with 24\u202f000 rows is kept.');
    expect(keptFinding({ samples: [sample, { ...sample, rows: null }, erased], uploads: [] })).toBe(
      '2 samples with 24\u202f000 rows are kept, 1 of them not read yet; the rows of one sample were erased.',
    );
    expect(keptFinding({ samples: [], uploads: [{ id: 'u', fileName: 'b.csv', arrived: 1, size: 2, from: 'Marian', seenAt: '' }] })).toBe(
      'No row of any applicant is kept in this model; 1 file has arrived in part.',
    );
  });

  it('says what rests on a sample and what follows from erasing it', () => {
    expect(restingWords(sample)).toBe('1 definition, 2 binnings and 1 version');
    expect(restingWords({ ...sample, definitions: 0, binnings: 0, versions: 0 })).toBe('nothing');
    expect(followsWords(sample)).toContain('1 version will no longer be replicable, and says so');
    expect(followsWords({ ...sample, versions: 3, runs: 2 })).toMatch(/^3 versions will no longer be replicable, and say so .* 2 runs that read them will end\./);
    expect(followsWords({ ...sample, versions: 0 })).toContain('No version rests on these rows.');
  });
});

describe('KeptPage', () => {
  let fixture: ComponentFixture<KeptPage>;
  let server: HttpTestingController;

  async function settled(): Promise<void> {
    await new Promise((resolve) => setTimeout(resolve));
    await fixture.whenStable();
  }
  async function answer(samples: readonly KeptSample[]): Promise<void> {
    // Nothing is settled while a page waits for its data; after a dialog it asks once that has closed.
    const asked = await vi.waitUntil(() => {
      fixture.detectChanges();
      return server.match('/api/models/m1/kept-samples').at(0);
    });
    asked.flush({ samples, uploads: [] });
    await settled();
  }
  const outside = () => TestbedHarnessEnvironment.documentRootLoader(fixture);
  const shown = (): string => (fixture.nativeElement as HTMLElement).textContent ?? '';
  const button = (text: string | RegExp): Promise<MatButtonHarness> => outside().getHarness(MatButtonHarness.with({ text, ancestor: 'mat-dialog-container' }));

  beforeEach(() => {
    TestBed.configureTestingModule({
      providers: [provideHttpClient(withInterceptors([problemInterceptor])), provideHttpClientTesting(), provideIcons(), provideRouter([])],
    });
    server = TestBed.inject(HttpTestingController);
    fixture = TestBed.createComponent(KeptPage);
    fixture.componentRef.setInput('modelId', 'm1');
    fixture.detectChanges();
  });

  it('erases once there is a reason and the name of the file has been typed again', async () => {
    await answer([sample]);
    await (await outside().getHarness(MatButtonHarness.with({ text: 'Erase the rows' }))).click();
    const dialog = await outside().getHarness(MatDialogHarness);
    expect(await dialog.getText()).toContain('1 version will no longer be replicable');
    const reason = await dialog.getHarness(MatInputHarness.with({ selector: 'textarea' }));
    const name = await dialog.getHarness(MatInputHarness.with({ selector: 'input' }));
    await reason.setValue('Retention has ended.');
    await name.setValue('applicants');
    await (await button('Erase the rows')).click();
    server.expectNone('/api/models/m1/samples/s1/erasure');
    expect(await dialog.getText()).toContain('erasing cannot be undone');

    await name.setValue('applicants.csv');
    await (await button('Erase the rows')).click();
    const sent = server.expectOne('/api/models/m1/samples/s1/erasure');
    expect(sent.request.body).toEqual({ reason: 'Retention has ended.', fileName: 'applicants.csv' });
    sent.flush(null, { status: 204, statusText: 'No Content' });
    await answer([erased]);
    expect(shown()).toMatch(/erased .*2\s+Dec\s+2026.* Ada .*Retention has ended\./);
    expect(shown()).not.toContain('Erase the rows');
  });

  it('offers nothing to whoever may not', async () => {
    await answer([{ ...sample, abilities: [] }]);
    expect(shown()).toContain('1 sample with 24\u202f000 rows is kept.');
    expect(shown()).not.toContain('Erase');
  });
});
