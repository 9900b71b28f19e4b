import type { HarnessLoader } from '@angular/cdk/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { provideHttpClient, withInterceptors } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { TestBed } from '@angular/core/testing';
import { MatButtonHarness } from '@angular/material/button/testing';
import { MatDialogHarness } from '@angular/material/dialog/testing';
import { MatInputHarness } from '@angular/material/input/testing';
import { MatRadioButtonHarness } from '@angular/material/radio/testing';
import { MatSelectHarness } from '@angular/material/select/testing';
import { Router, provideRouter, withComponentInputBinding } from '@angular/router';
import { RouterTestingHarness } from '@angular/router/testing';
import { mostReclassedAtOnce } from '@tallystone/contracts/binnings/limits';
import type { Binning, CharacteristicList, CharacteristicSummary } from '@tallystone/contracts/binnings/schema';
import { CurrentModel } from '../../../core/current-model';
import { type Run, Runs } from '../../../core/events/runs';
import { problemInterceptor } from '../../../core/http/interceptors';
import { provideIcons } from '../../../ui/register-icons';
import { firstBinning, listOf, listed } from '../testing/binnings';
import { CharacteristicsPage } from './characteristics-page';

const age = listed('age', { informationValue: 0.12, group: 1, position: 0, revision: 3 });
const utilisation = listed('utilisation', { informationValue: 0.41, position: 1, revision: 5, edits: 2 });
const known = listed('months_known', { informationValue: 0.2, group: 1, position: 2, revision: 7 });
const region = listed('region', { informationValue: 0.01, position: 3, included: false, leftOutReason: 'Tells nobody apart' });
const list = listOf([age, utilisation, known, region]);
const address = '/models/m1/binning/b1';
const run: Run = {
  id: 'r1',
  kind: 'binning.reclass',
  state: 'running',
  phase: 'Classing',
  share: 0.5,
  attempt: 1,
  modelId: 'm1',
  entity: 'binning',
  entityId: 'b1',
  startedBy: 'Marian',
  createdAt: '2026-11-03T13:00:00Z',
  startedAt: '2026-11-03T13:00:01Z',
  endedAt: null,
  result: null,
  problem: null,
  abilities: ['cancel'],
};
const reference = ({ id, revision }: CharacteristicSummary) => ({ id, revision });

describe('CharacteristicsPage', () => {
  let harness: RouterTestingHarness;
  let server: HttpTestingController;
  let outside: HarnessLoader;

  async function settled(): Promise<void> {
    await new Promise((resolve) => setTimeout(resolve));
    harness.detectChanges();
  }
  /** Opens the page and answers what it asks for. */
  async function open({
    of = list,
    binning = {},
    query = '',
    labels = [],
  }: { of?: CharacteristicList; binning?: Partial<Binning>; query?: string; labels?: object[] } = {}): Promise<void> {
    await harness.navigateByUrl(`${address}${query}`, CharacteristicsPage);
    server.expectOne('/api/binnings/b1').flush({ ...firstBinning, ...binning });
    server.expectOne('/api/binnings/b1/characteristics').flush(of);
    await settled();
    await settled();
    server.expectOne('/api/sample-definitions/d1/labels').flush({ labels });
    await settled();
  }
  const page = (): HTMLElement => harness.routeNativeElement!;
  const shown = (): string => page().textContent?.replace(/\s+/g, ' ') ?? '';
  const names = (): (string | undefined)[] => [...page().querySelectorAll('tbody tr th')].map((cell) => cell.textContent?.trim());
  const query = (): string | undefined => TestBed.inject(Router).url.split('?')[1];
  const choose = async (...columns: string[]): Promise<void> => {
    for (const column of columns) page().querySelector<HTMLInputElement>(`input[aria-label="Choose ${column}"]`)!.click();
    await settled();
  };
  const bulk = (): string => page().querySelector('.bulk')?.textContent?.replace(/\s+/g, ' ').trim() ?? '';
  const press = async (text: string, ancestor?: string): Promise<void> =>
    (await outside.getHarness(MatButtonHarness.with({ text, ...(ancestor && { ancestor }) }))).click();
  /** The dialog comes with a bundle of its own, once somebody asks for it. */
  const dialog = (): Promise<MatDialogHarness> => vi.waitFor(() => outside.getHarness(MatDialogHarness), 5_000);
  const posted = (url: string) => vi.waitUntil(() => server.match({ method: 'POST', url }).at(0));

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
    outside = TestbedHarnessEnvironment.documentRootLoader(harness.fixture);
  });

  it('lists the characteristics by what they tell, and says what they say', async () => {
    await open();
    expect(shown()).toContain(list.finding);
    expect(names()).toEqual(['utilisation', 'months_known', 'age', 'region']);
    expect(shown()).toContain('left out: Tells nobody apart');
    expect(page().querySelector('tbody tr a')?.getAttribute('href')).toBe(`${address}/${utilisation.id}`);
  });

  it('finds by name and by label what is typed, and keeps it in the address', async () => {
    const labels = [{ column: 'months_known', label: 'Length of acquaintance', unit: '' }];
    await open({ labels });
    const field = await outside.getHarness(MatInputHarness.with({ selector: '[type=search]' }));
    await field.setValue(' ACQUAINT ');
    await vi.waitFor(() => expect(query()).toBe('search=ACQUAINT'));
    await settled();
    expect(names()).toEqual(['months_known']);
    await field.setValue('io');
    await vi.waitFor(() => expect(query()).toBe('search=io'));
    await settled();
    expect(names()).toEqual(['utilisation', 'region']);
    await field.setValue('nothing of the kind');
    await vi.waitFor(() => expect(names()).toEqual([]));
    expect(shown()).toContain('No characteristic fits this search.');
    await field.setValue('');
    await vi.waitFor(() => expect(query()).toBeUndefined());
    await settled();
    expect(names()).toHaveLength(4);
  });

  it('shows the part that is asked for, from the address as from the list of parts', async () => {
    await open({ query: '?show=left-out' });
    expect(names()).toEqual(['region']);
    await (await outside.getHarness(MatSelectHarness)).clickOptions({ text: 'Saying the same as another' });
    await vi.waitFor(() => expect(query()).toBe('show=same'));
    await settled();
    expect(names()).toEqual(['months_known', 'age']);
  });

  it('is sorted by its heads, and keeps the order in the address', async () => {
    await open();
    const sortBy = async (label: string): Promise<void> => {
      page().querySelector<HTMLButtonElement>(`thead th[data-label="${label}"] button`)!.click();
      await vi.waitFor(() => expect(query()).toContain('sort='));
      await settled();
    };
    await sortBy('Characteristic');
    expect(query()).toBe('sort=column.up');
    expect(names()).toEqual(['age', 'months_known', 'region', 'utilisation']);
    await harness.navigateByUrl(`${address}?sort=iv.up`);
    await settled();
    expect(names()).toEqual(['region', 'age', 'months_known', 'utilisation']);
  });

  it('says how many are chosen, and all that are shown at once, no others', async () => {
    await open({ query: '?show=included' });
    expect(bulk()).toBe('Choose all shown');
    await choose('age');
    expect(bulk()).toContain('1 characteristic chosen');
    await choose('age');
    expect(bulk()).toBe('Choose all shown');
    page().querySelector<HTMLInputElement>('.bulk input')!.click();
    await settled();
    expect(bulk()).toContain('3 characteristics chosen');
    expect(bulk()).not.toContain('Take in');
    page().querySelector<HTMLInputElement>('.bulk input')!.click();
    await settled();
    expect(bulk()).toBe('Choose all shown');
  });

  it('offers nothing to choose to those who only read', async () => {
    await open({ binning: { abilities: [] } });
    expect(names()).toHaveLength(4);
    expect(page().querySelector('input[type=checkbox]')).toBeNull();
  });

  it('leaves out what is chosen and included, for a reason, and shows what then stands', async () => {
    await open();
    await choose('age', 'months_known', 'region');
    await press('Leave out…');
    const asked = await dialog();
    expect(await asked.getTitleText()).toBe('Leave 2 characteristics out?');
    await (await asked.getHarness(MatRadioButtonHarness.with({ label: 'Same as another characteristic' }))).check();
    await press('Leave out', 'mat-dialog-container');
    const asking = await posted('/api/binnings/b1/inclusions');
    expect(asking.request.body).toEqual({
      characteristics: [age, known].map(reference),
      included: false,
      reason: 'Same as another characteristic',
    });
    const out = { included: false, leftOutReason: 'Same as another characteristic' };
    asking.flush(listOf([{ ...age, ...out }, utilisation, { ...known, ...out }, region], { finding: 'One is left.' }));
    await settled();
    expect(shown()).toContain('One is left.');
    expect(page().querySelectorAll('tbody tr.quiet')).toHaveLength(3);
    expect(bulk()).toBe('Choose all shown');
    server.expectOne('/api/binnings/b1');
  });

  it('leaves nothing out where somebody thinks better of it', async () => {
    await open();
    await choose('age');
    await press('Leave out…');
    expect(await (await dialog()).getTitleText()).toBe('Leave age out?');
    await press('Cancel', 'mat-dialog-container');
    await settled();
    server.expectNone({ method: 'POST' });
    expect(bulk()).toContain('1 characteristic chosen');
  });

  it('takes in what is chosen and left out, without a reason', async () => {
    await open();
    await choose('utilisation', 'region');
    await press('Take in');
    const asking = await posted('/api/binnings/b1/inclusions');
    expect(asking.request.body).toEqual({ characteristics: [reference(region)], included: true });
    asking.flush(listOf([age, utilisation, known, { ...region, included: true, leftOutReason: '' }]));
    await settled();
    expect(page().querySelectorAll('tbody tr.quiet')).toHaveLength(0);
  });

  it('says why a change was refused, and reads the list that somebody else has changed', async () => {
    await open();
    await choose('region');
    await press('Take in');
    const asking = await posted('/api/binnings/b1/inclusions');
    asking.flush(
      { title: 'Changed', status: 409, code: 'changed-meanwhile', detail: 'region was changed meanwhile.' },
      { status: 409, statusText: 'Conflict' },
    );
    await settled();
    expect(shown()).toContain('region was changed meanwhile.');
    server.expectOne('/api/binnings/b1/characteristics').flush(listOf([age, { ...region, revision: 9 }]));
    await settled();
    expect(names()).toEqual(['age', 'region']);
    await press('Take in');
    expect((await posted('/api/binnings/b1/inclusions')).request.body).toMatchObject({
      characteristics: [{ id: region.id, revision: 9 }],
    });
  });

  describe('a binning whose run ended without bins', () => {
    const failed: Partial<Binning> = {
      state: 'failed',
      runId: '0b1c3d5e-0000-4000-8000-000000000001',
      problem: 'The work failed on our side. Give the administrator the id of this run.',
      characteristics: 0,
      included: 0,
      abilities: [],
      from: { id: 'b0', name: 'Earlier', carried: 0, notCarried: 0, notHere: [] },
    };
    const nothing = listOf([], { finding: 'Nothing has been classed yet.' });
    const develop = async (abilities: string[]): Promise<void> => {
      const opening = TestBed.inject(CurrentModel).open('m1');
      server.expectOne('/api/models/m1').flush({ id: 'm1', name: 'Cards', abilities }, { headers: { ETag: '"1"' } });
      await opening;
      await settled();
    };
    const links = (): (string | undefined)[] => [...page().querySelectorAll('a')].map((link) => link.textContent?.trim());

    it('says why with the id of the run, and offers nothing that needs bins', async () => {
      await open({ of: nothing, binning: failed });
      await develop(['develop']);
      const alert = page().querySelector('[role=alert]')?.textContent?.replace(/\s+/g, ' ');
      expect(alert).toContain(`The characteristics were not classed. ${failed.problem}`);
      expect(alert).toContain(`Run ${failed.runId}`);
      expect(links()).toEqual(['All binnings']);
      expect(page().querySelector('ts-out-of-time-cover')).toBeNull();
      expect(shown()).toContain('under the same constraints, starting from Earlier.');
    });

    it('is started again with what it was started with, and leads to the new one', async () => {
      await open({ of: nothing, binning: failed });
      await develop(['develop']);
      await press('Start again');
      const asking = await posted('/api/models/m1/binnings');
      const key = asking.request.headers.get('Idempotency-Key');
      expect(key).toBeTruthy();
      const { definitionId, name, constraints } = firstBinning;
      expect(asking.request.body).toEqual({ definitionId, name, constraints, fromBinningId: 'b0' });
      asking.flush(
        { title: 'Busy', status: 503, code: 'busy', detail: 'No worker is there.' },
        { status: 503, statusText: 'Unavailable' },
      );
      await settled();
      expect(shown()).toContain('No worker is there.');
      await press('Start again');
      const again = await posted('/api/models/m1/binnings');
      expect(again.request.headers.get('Idempotency-Key')).toBe(key);
      again.flush({ ...firstBinning, id: 'b2', state: 'queued' });
      await vi.waitFor(() => expect(TestBed.inject(Router).url).toBe('/models/m1/binning/b2'));
    });

    it('is started again where it was cancelled, and by nobody who only reads', async () => {
      await open({ of: nothing, binning: { ...failed, state: 'cancelled', problem: null, runId: null } });
      expect(shown()).not.toContain('Start again');
      await develop(['develop']);
      expect(shown()).toContain('Start again');
      await develop([]);
      expect(shown()).not.toContain('Start again');
    });

    it('has its actions where it is ready, and does not offer to start again', async () => {
      await open();
      await develop(['develop']);
      expect(links()).toEqual(expect.arrayContaining(['Correlations', 'History of edits', 'All binnings']));
      expect(page().querySelector('ts-out-of-time-cover')).not.toBeNull();
      expect(shown()).not.toContain('Start again');
    });
  });

  describe('classing anew', () => {
    it('asks under which constraints, beginning with those of the binning, and for a reason where edits go', async () => {
      await open();
      await choose('age', 'utilisation');
      await press('Class anew…');
      const asked = await dialog();
      expect(await asked.getTitleText()).toBe('Class 2 characteristics anew');
      expect(await asked.getText()).toContain('2 manual edits will no longer be in effect');
      const field = (selector: string) => asked.getHarness(MatInputHarness.with({ selector }));
      expect(await (await field('[formControlName=smallestShare]')).getValue()).toBe('5');
      await (await field('[formControlName=mostBins]')).setValue('4');
      await (await field('textarea')).setValue('Too many bins');
      await press('Class anew', 'mat-dialog-container');
      const request = await posted('/api/binnings/b1/reclassings');
      const { fineClasses: _fineClasses, ...constraints } = firstBinning.constraints;
      expect(request.request.body).toEqual({
        characteristics: [age, utilisation].map(reference),
        constraints: { ...constraints, mostBins: 4 },
        reason: 'Too many bins',
      });
      request.flush(listOf([age, { ...utilisation, edits: 0, bins: 4 }, known, region], { finding: 'Classed anew.' }));
      await settled();
      expect(shown()).toContain('Classed anew.');
      expect(bulk()).toBe('Choose all shown');
    });

    it('goes on in a run where there are many, whose end is read', async () => {
      const many = Array.from({ length: mostReclassedAtOnce + 1 }, (_, place) => listed(`column_${place}`));
      await open({ of: listOf(many) });
      page().querySelector<HTMLInputElement>('.bulk input')!.click();
      await settled();
      await press('Class anew…');
      await dialog();
      await press('Class anew', 'mat-dialog-container');
      const request = await posted('/api/binnings/b1/reclassing-runs');
      expect(request.request.headers.get('Idempotency-Key')).toBeTruthy();
      expect((request.request.body as { characteristics: object[] }).characteristics).toEqual(many.map(reference));
      request.flush({ runId: 'r1' });
      const runs = TestBed.inject(Runs);
      runs.follow(run);
      await settled();
      expect(shown()).toContain('Classing anew');
      expect(bulk()).toBe('Choose all shown');
      await choose('column_0');
      expect(await (await outside.getHarness(MatButtonHarness.with({ text: 'Class anew…' }))).isDisabled()).toBe(true);
      runs.follow({ ...run, state: 'succeeded', endedAt: '2026-03-01T11:00:00.000Z' });
      await settled();
      server.expectOne('/api/binnings/b1/characteristics').flush(listOf(many, { finding: 'Classed anew.' }));
      await settled();
      expect(shown()).toContain('Classed anew.');
      expect(page().querySelector('ts-run-progress')).toBeNull();
    });
  });

  describe('a run that was not started on this page', () => {
    const bar = (): Element | null => page().querySelector('[role=progressbar][aria-label="Classing anew"]');
    const hear = async (change: Partial<Run>): Promise<void> => {
      TestBed.inject(Runs).follow({ ...run, ...change });
      await settled();
    };

    it('is shown where it classes characteristics of this binning anew', async () => {
      await open();
      await hear({ id: 'r0', entityId: 'b2' });
      await hear({ id: 'r3', kind: 'binning.correlate' });
      expect(bar()).toBeNull();
      await hear({});
      expect(bar()?.getAttribute('aria-valuenow')).toBe('50');
      await hear({ state: 'succeeded', endedAt: '2026-11-03T13:00:09Z' });
      expect(bar()).toBeNull();
    });

    it('has the list read again once it has ended', async () => {
      await open();
      await hear({});
      server.expectNone('/api/binnings/b1/characteristics');
      await hear({ state: 'cancelled', endedAt: '2026-11-03T13:00:09Z' });
      server.expectOne('/api/binnings/b1/characteristics').flush(listOf([age], { finding: 'Read again.' }));
      await settled();
      expect(shown()).toContain('Read again.');
    });
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

    it('are not called out of date while they speak of the bins as they are', async () => {
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
