import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { provideHttpClient, withInterceptors } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { TestBed } from '@angular/core/testing';
import { MatSelectHarness } from '@angular/material/select/testing';
import { provideRouter } from '@angular/router';
import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { DefinedColumn, DraftContent } from '@tallystone/contracts/samples/definition';
import { problemInterceptor } from '../../../core/http/interceptors';
import { provideIcons } from '../../../ui/register-icons';
import { DictionaryStore } from '../data/dictionary-store';
import { DraftStore } from '../data/draft-store';
import { ColumnsPage } from './columns-page';

const address = '/api/models/m1/samples/s1';
const zeroAndOne = (position: number, column: string): ColumnProfile => ({
  position,
  column,
  kind: 'numeric',
  rows: 100,
  distinct: 2,
  missing: 0,
  missingTokens: [],
  specialSuspects: [],
  mostFrequent: [
    { value: '0', count: 80 },
    { value: '1', count: 20 },
  ],
  valuesComplete: true,
  numeric: null,
  date: null,
  text: null,
  flags: [],
  suggestedRole: 'characteristic',
  suggestedProtected: false,
  suggestion: 'Nothing speaks against it.',
  hashed: false,
});
const names = ['bad', 'repaid', 'declined', 'approved', 'part', 'split'];
const roles: Partial<Record<string, DefinedColumn['role']>> = { bad: 'outcome', declined: 'decision', part: 'partition' };
const content: DraftContent = {
  columns: names.map((column) => ({ column, kind: 'numeric', role: roles[column] ?? 'not used', protected: false, citation: null, special: [], reason: null })),
  outcome: { good: ['0'], bad: ['1'], indeterminate: [], excluded: [] },
  declined: { values: ['1'] },
  exclusions: [],
  partition: { by: 'column', development: ['0'], holdOut: ['1'], outOfTime: [] },
}; // prettier-ignore

describe('a role that moves on the columns page', () => {
  /** Gives a column a role on the page, and tells what is saved. */
  async function give(column: string, role: string): Promise<DraftContent> {
    TestBed.configureTestingModule({
      providers: [
        provideHttpClient(withInterceptors([problemInterceptor])),
        provideHttpClientTesting(),
        provideIcons(),
        provideRouter([]),
        DraftStore,
        DictionaryStore,
      ],
    });
    const server = TestBed.inject(HttpTestingController);
    const fixture = TestBed.createComponent(ColumnsPage);
    fixture.componentRef.setInput('modelId', 'm1');
    fixture.componentRef.setInput('sampleId', 's1');
    fixture.componentRef.setInput('column', column);
    fixture.detectChanges();
    const settled = async (): Promise<void> => {
      await new Promise((resolve) => setTimeout(resolve));
      fixture.detectChanges();
    };
    server.expectOne(address).flush({ fileName: 'a.csv', state: 'ready', erased: null, abilities: ['define'] });
    server.expectOne(`${address}/columns`).flush({ columns: names.map((name, place) => zeroAndOne(place, name)), rows: 100, duplicateRows: 0, finding: '' });
    await settled();
    server.expectOne(`${address}/draft`).flush({ content, revision: 1, savedAt: '2026-01-01T00:00:00Z', savedBy: 'Marian', problems: [] }, { headers: { etag: '"1"' } });
    server.match(({ url }) => url.includes('/dictionary')).forEach((asked) => asked.flush({ entries: [], revision: 0, savedAt: null, savedBy: null, carried: null, readAgain: null, abilities: [] }, { headers: { etag: '"0"' } }));
    await settled();
    const [select] = await TestbedHarnessEnvironment.loader(fixture).getAllHarnesses(MatSelectHarness);
    await select.open();
    await select.clickOptions({ text: role });
    void TestBed.inject(DraftStore).flush();
    await settled();
    const saved = server.expectOne(({ method }) => method === 'PUT');
    return saved.request.body as DraftContent;
  } // prettier-ignore

  it('takes out what values meant where another column becomes the outcome', async () => {
    const saved = await give('repaid', 'outcome');
    expect(saved.columns[1].role).toBe('outcome');
    expect(saved.outcome).toEqual({ good: [], bad: [], indeterminate: [], excluded: [] });
    expect([saved.declined, saved.partition]).toEqual([content.declined, content.partition]);
  });

  it('takes it out where the outcome is not used any more', async () => {
    expect((await give('bad', 'not used')).outcome).toEqual({ good: [], bad: [], indeterminate: [], excluded: [] });
  });

  it('does so for the decision and the partition', async () => {
    const decision = await give('approved', 'decision');
    expect([decision.declined, decision.outcome, decision.partition]).toEqual([null, content.outcome, content.partition]);
    TestBed.resetTestingModule();
    const partition = await give('split', 'partition');
    expect(partition.partition).toEqual({ by: 'column', development: [], holdOut: [], outOfTime: [] });
    expect([partition.outcome, partition.declined]).toEqual([content.outcome, content.declined]);
  });

  it('leaves it alone where none of these roles moves', async () => {
    const saved = await give('repaid', 'characteristic');
    expect([saved.outcome, saved.declined, saved.partition]).toEqual([content.outcome, content.declined, content.partition]);
  });
});
