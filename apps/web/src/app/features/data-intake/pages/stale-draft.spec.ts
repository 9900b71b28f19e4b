import { type HarnessLoader } from '@angular/cdk/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { ChangeDetectionStrategy, Component, inject } from '@angular/core';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { MatButtonHarness } from '@angular/material/button/testing';
import { MatDialogHarness } from '@angular/material/dialog/testing';
import type { Draft, DraftContent } from '@tallystone/contracts/samples/definition';
import { Problem } from '../../../core/http/problem';
import { DraftStore } from '../data/draft-store';
import { Samples } from '../data/samples';
import { StaleNotice } from '../ui/stale-notice';
import { asksWhenStale } from './stale-draft';

@Component({
  changeDetection: ChangeDetectionStrategy.OnPush,
  imports: [StaleNotice],
  template: `
    @if (draft.saveState() === 'stale') {
      <ts-stale-notice [theirs]="draft.theirs()" (settled)="settle()" />
    }
  `,
})
class Page {
  readonly draft = inject(DraftStore);
  readonly settle = asksWhenStale(this.draft);
}

describe('a page of a draft that somebody else saved first', () => {
  const start: DraftContent = {
    columns: [],
    outcome: { good: [], bad: [], indeterminate: [], excluded: [] },
    declined: null,
    exclusions: [],
    partition: { by: 'seed', seed: 1, holdOutShare: 0.3, outOfTime: null },
  };
  const rule = (reason: string) => ({ reason, combine: 'all' as const, tests: [] });
  let there: Draft;
  let readable: boolean;
  const save = (content: DraftContent, savedBy: string): Draft =>
    (there = { content, revision: there.revision + 1, savedAt: '2026-11-03T13:05:00Z', savedBy, problems: [] });
  const tagged = () => ({ value: there, etag: `"${there.revision}"` });
  const samples = {
    draft: () => (readable ? Promise.resolve(tagged()) : Promise.reject(new Problem(503, 'unavailable', 'Not now', '', []))),
    saveDraft: (_model: string, _sample: string, sent: DraftContent, etag: string) => {
      if (etag !== tagged().etag) return Promise.reject(new Problem(412, 'stale', 'Changed meanwhile', '', []));
      save(sent, 'Mara');
      return Promise.resolve(tagged());
    },
  };
  let fixture: ComponentFixture<Page>;
  let outside: HarnessLoader;
  const draft = (): DraftStore => fixture.componentInstance.draft;
  const notice = (): string => {
    fixture.detectChanges();
    return (fixture.nativeElement as HTMLElement).textContent?.replace(/\s+/g, ' ').trim() ?? '';
  };
  /** The dialog comes with a bundle of its own. */
  const dialog = (): Promise<MatDialogHarness> => vi.waitFor(() => outside.getHarness(MatDialogHarness), 5_000);
  const closed = async (): Promise<void> =>
    vi.waitFor(async () => expect(await outside.getAllHarnesses(MatDialogHarness)).toEqual([]), 5_000);
  const press = async (text: string): Promise<void> => (await outside.getHarness(MatButtonHarness.with({ text }))).click();
  const said = (): string[] =>
    [...document.querySelectorAll('mat-dialog-container :is(h3, dt, dd)')].map(
      (element) => element.textContent?.replace(/\s+/g, ' ').trim() ?? '',
    );
  const buttons = async (): Promise<string[]> =>
    Promise.all(
      (await outside.getAllHarnesses(MatButtonHarness.with({ ancestor: 'mat-dialog-container' }))).map((button) =>
        button.getText(),
      ),
    );
  const change = async (content: DraftContent): Promise<void> => {
    draft().change(() => content);
    await draft().flush();
    fixture.detectChanges();
  };

  beforeEach(async () => {
    there = { content: start, revision: 1, savedAt: '', savedBy: 'Mara', problems: [] };
    readable = true;
    TestBed.configureTestingModule({ providers: [DraftStore, { provide: Samples, useValue: samples }] });
    fixture = TestBed.createComponent(Page);
    outside = TestbedHarnessEnvironment.documentRootLoader(fixture);
    fixture.detectChanges();
    await draft().open('m1', 's1');
    save({ ...start, exclusions: [rule('Staff')] }, 'Nils');
  });

  it('asks by itself, with who saved and what differs, and keeps both', async () => {
    await change({ ...start, partition: { by: 'seed', seed: 7, holdOutShare: 0.3, outOfTime: null } });
    const open = await dialog();
    expect(await open.getTitleText()).toBe('Nils saved this draft first');
    expect(await open.getText()).toMatch(/Saved 3.Nov.2026, /);
    expect(said()).toEqual([
      'Changed by Nils',
      'Exclusions',
      'Theirs 1. Staff: no test yet',
      'Mine none',
      'Changed by you',
      'Partition',
      'Theirs hold-out 30.0 % by seed 1, nothing out-of-time',
      'Mine hold-out 30.0 % by seed 7, nothing out-of-time',
    ]);
    expect(await buttons()).toEqual(['Decide later', 'Take theirs', 'Save mine', 'Keep both']);
    await press('Keep both');
    await closed();
    await vi.waitFor(() => expect(draft().saveState()).toBe('saved'));
    expect(there.content).toMatchObject({ exclusions: [rule('Staff')], partition: { seed: 7 } });
    expect(notice()).toBe('');
  });

  it('offers to keep both only where they do not contradict each other, and asks again when it is saved again', async () => {
    await change({ ...start, exclusions: [rule('Branch')] });
    const text = await (await dialog()).getText();
    expect(text).toContain('Changed by both');
    expect(await buttons()).toEqual(['Decide later', 'Take theirs', 'Save mine']);
    save({ ...start, exclusions: [rule('Staff'), rule('Branch')] }, 'Olga');
    await press('Save mine');
    await vi.waitFor(async () => expect(await (await dialog()).getTitleText()).toBe('Olga saved this draft first'), 5_000);
    await press('Take theirs');
    await closed();
    await vi.waitFor(() => expect(draft().saveState()).toBe('saved'));
    expect(draft().content()?.exclusions).toEqual([rule('Staff'), rule('Branch')]);
  });

  it('keeps who saved in sight when it is decided later, and asks again from there', async () => {
    await change({ ...start, exclusions: [rule('Branch')] });
    await dialog();
    await press('Decide later');
    await closed();
    expect(notice()).toMatch(/^Nils saved this draft first, 3.Nov.2026, .+ Your changes are kept here and not saved/);
    await press('Compare and decide');
    expect(await (await dialog()).getTitleText()).toBe('Nils saved this draft first');
    await press('Save mine');
    await closed();
    await vi.waitFor(() => expect(there.content.exclusions).toEqual([rule('Branch')]));
  });

  it('says that somebody saved where theirs cannot be read, and reads it when asked', async () => {
    readable = false;
    await change({ ...start, exclusions: [rule('Branch')] });
    expect(notice()).toContain('Someone else saved this draft first.');
    expect(await outside.getAllHarnesses(MatDialogHarness)).toEqual([]);
    readable = true;
    await press('Compare and decide');
    expect(await (await dialog()).getTitleText()).toBe('Nils saved this draft first');
    await press('Decide later');
    await closed();
  });
});
