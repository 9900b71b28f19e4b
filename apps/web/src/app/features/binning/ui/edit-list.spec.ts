import { type HarnessLoader } from '@angular/cdk/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { MatFormFieldHarness } from '@angular/material/form-field/testing';
import { MatInputHarness } from '@angular/material/input/testing';
import { MatSelectHarness } from '@angular/material/select/testing';
import type { EditReason } from '@tallystone/contracts/binnings/edits';
import type { BenchEdit } from '../bench/history';
import { moment } from '../../../ui/numbers';
import { utilisation } from '../testing/characteristics';
import { EditList, type KnownEdit } from './edit-list';
import { reasons } from './reason-words';

const edit = (id: string, what: string, reason: EditReason | null = null): BenchEdit => ({
  id,
  kind: 'cut moved',
  what,
  before: utilisation.current,
  after: utilisation.current,
  reason,
});
const moved = edit('e1', 'Cut moved from 20 to 30', { code: 'round number', text: '' });
const merged = edit('e2', 'Bins merged at 40');

describe('the list of edits by hand', () => {
  let fixture: ComponentFixture<EditList>;
  let loader: HarnessLoader;
  let explained: { id: string; reason: EditReason }[];
  let began: string[];

  async function show(edits: readonly BenchEdit[], inputs: Record<string, unknown> = {}): Promise<void> {
    fixture.componentRef.setInput('edits', edits);
    for (const [name, value] of Object.entries(inputs)) fixture.componentRef.setInput(name, value);
    await fixture.whenStable();
  }
  const shown = (): string[] =>
    [...(fixture.nativeElement as HTMLElement).querySelectorAll('.edit')].map(
      (one) => one.textContent?.replace(/\s+/g, ' ').trim() ?? '',
    );
  const labels = async (): Promise<(string | null)[]> =>
    Promise.all((await loader.getAllHarnesses(MatFormFieldHarness)).map((field) => field.getLabel()));
  /** As a person leaves a field: the words are taken then. */
  const write = async (text: string): Promise<void> => {
    const field = await loader.getHarness(MatInputHarness);
    await field.setValue(text);
    await (await field.host()).dispatchEvent('change');
  };

  beforeEach(() => {
    fixture = TestBed.createComponent(EditList);
    loader = TestbedHarnessEnvironment.loader(fixture);
    [explained, began] = [[], []];
    fixture.componentInstance.explained.subscribe((one) => explained.push(one));
    fixture.componentInstance.began.subscribe((id) => began.push(id));
  });

  it('has numbers as they are read elsewhere', async () => {
    await show([edit('e1', 'Cut moved from 18762.23 to 19000')]);
    expect((fixture.nativeElement as HTMLElement).querySelector('.what')?.textContent).toContain(
      'Cut moved from 18\u202F762.23 to 19\u202F000',
    );
  });

  it('says that there are none', async () => {
    await show([]);
    expect((fixture.nativeElement as HTMLElement).textContent).toContain('The bins are as they were classed automatically.');
  });

  it('tells the latest first, with who made it and where it was carried over from, to those who only read', async () => {
    const known = new Map<string, KnownEdit>([
      ['e1', { by: 'Marian', at: '2026-03-01T10:00:00.000Z', from: 'First binning, Colin' }],
    ]);
    const written = edit('e3', 'Bin split at 50', { code: 'other', text: 'Two products' });
    await show([moved, merged, written], { known });
    expect(shown()).toHaveLength(3);
    expect(shown()[0]).toMatch(/^Bin split at 50 ?Two products$/);
    expect(shown()[1]).toMatch(/^Bins merged at 40 ?Not explained$/);
    expect(shown()[2]).toContain(
      `Marian, ${moment('2026-03-01T10:00:00.000Z').replace(/\s+/g, ' ')}; carried over from First binning, Colin`,
    );
    expect(shown()[2]).toMatch(/^Cut moved from 20 to 30.*Round number$/);
    expect(await labels()).toEqual([]);
  });

  it('marks one that has no reason, and takes one from the list', async () => {
    await show([merged], { editable: true });
    expect(await labels()).toEqual(['Not explained yet']);
    const select = await loader.getHarness(MatSelectHarness);
    await select.open();
    expect(await Promise.all((await select.getOptions()).map((option) => option.getText()))).toEqual(
      reasons.map(({ label }) => label),
    );
    await select.clickOptions({ text: 'Bin too small' });
    expect(explained).toEqual([{ id: 'e2', reason: { code: 'bin too small', text: '' } }]);
    await show([{ ...merged, reason: explained[0].reason }]);
    expect(await labels()).toEqual(['Reason', 'More on it (optional)']);
    expect(began).toEqual([]);
  });

  it('keeps what was written when another reason of the list is chosen', async () => {
    const few = edit('e2', 'Bins merged at 40', { code: 'bin too small', text: 'Twelve bads' });
    await show([few], { editable: true });
    await (await loader.getHarness(MatSelectHarness)).clickOptions({ text: 'Limit used in policy' });
    await write(' Thirteen bads ');
    expect(explained).toEqual([
      { id: 'e2', reason: { code: 'limit used in policy', text: 'Twelve bads' } },
      { id: 'e2', reason: { code: 'bin too small', text: 'Thirteen bads' } },
    ]);
    // What is optional can be taken back.
    await write('');
    expect(explained.at(-1)).toEqual({ id: 'e2', reason: { code: 'bin too small', text: '' } });
  });

  it('takes another reason only with its words', async () => {
    await show([merged], { editable: true });
    await (await loader.getHarness(MatSelectHarness)).clickOptions({ text: 'Another reason' });
    expect([began, explained]).toEqual([['e2'], []]);
    await show([merged], { writing: 'e2' });
    expect(await labels()).toEqual(['Not explained yet', 'In your words']);
    expect(await (await loader.getHarness(MatSelectHarness)).getValueText()).toBe('Another reason');
    await write('  ');
    expect(explained).toEqual([]);
    await write(' Two products ');
    expect(explained).toEqual([{ id: 'e2', reason: { code: 'other', text: 'Two products' } }]);
  });
});
