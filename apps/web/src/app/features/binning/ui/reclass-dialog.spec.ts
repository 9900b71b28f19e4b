import { type HarnessLoader } from '@angular/cdk/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { ChangeDetectionStrategy, Component, inject } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { MatButtonHarness } from '@angular/material/button/testing';
import { MatDialog } from '@angular/material/dialog';
import { MatDialogHarness } from '@angular/material/dialog/testing';
import { MatInputHarness } from '@angular/material/input/testing';
import { firstValueFrom } from 'rxjs';
import { usualConstraints } from './constraints-form';
import { type ReclassAnswer, ReclassDialog, type ReclassQuestion } from './reclass-dialog';

@Component({ changeDetection: ChangeDetectionStrategy.OnPush, template: '' })
class Host {
  readonly dialogs = inject(MatDialog);
}

describe('asking how to class anew', () => {
  let loader: HarnessLoader;
  let answer: Promise<ReclassAnswer | undefined>;

  async function ask(question: Partial<ReclassQuestion>): Promise<MatDialogHarness> {
    const fixture = TestBed.createComponent(Host);
    loader = TestbedHarnessEnvironment.documentRootLoader(fixture);
    const data: ReclassQuestion = {
      columns: ['age'],
      constraints: { ...usualConstraints, fineClasses: 50 },
      edits: 0,
      ...question,
    };
    const reference = fixture.componentInstance.dialogs.open<ReclassDialog, ReclassQuestion, ReclassAnswer>(ReclassDialog, {
      data,
    });
    answer = firstValueFrom(reference.afterClosed());
    return loader.getHarness(MatDialogHarness);
  }
  const field = (selector: string): Promise<MatInputHarness> => loader.getHarness(MatInputHarness.with({ selector }));
  const press = async (text: string): Promise<void> => (await loader.getHarness(MatButtonHarness.with({ text }))).click();
  const isOpen = async (): Promise<boolean> => (await loader.getAllHarnesses(MatDialogHarness)).length > 0;

  afterEach(() => TestBed.inject(MatDialog).closeAll());

  it('names what is classed, one by its name and several by their number', async () => {
    expect(await (await ask({})).getTitleText()).toBe('Class age anew');
    await press('Cancel');
    await answer;
    expect(await (await ask({ columns: ['age', 'home', 'region'] })).getTitleText()).toBe('Class 3 characteristics anew');
  });

  it('answers with the constraints and what was written, which nobody owes where no edit goes', async () => {
    const dialog = await ask({});
    expect(await dialog.getText()).toContain('Why (optional)');
    expect(await dialog.getText()).not.toContain('no longer be in effect');
    await (await field('[formControlName=smallestBads]')).setValue('35');
    await press('Class anew');
    expect(await answer).toEqual({ constraints: { ...usualConstraints, fineClasses: 50, smallestBads: 35 }, reason: '' });
  });

  it('does not ask for fine classes, which stay as they are', async () => {
    await ask({});
    expect(await loader.getAllHarnesses(MatInputHarness.with({ selector: '[formControlName=fineClasses]' }))).toEqual([]);
  });

  it('says how many edits go, and wants a reason for it', async () => {
    const dialog = await ask({ edits: 2 });
    expect(await dialog.getText()).toContain('2 manual edits will no longer be in effect; the history keeps them.');
    await press('Class anew');
    expect(await isOpen()).toBe(true);
    expect(await dialog.getText()).toContain('Say why; it is kept in the record.');
    await (await field('textarea')).setValue('   ');
    await press('Class anew');
    expect(await isOpen()).toBe(true);
    await (await field('textarea')).setValue('  New data, new bins ');
    await press('Class anew');
    expect((await answer)?.reason).toBe('New data, new bins');
    expect(await isOpen()).toBe(false);
  });

  it('does not go on with constraints that cannot be', async () => {
    const dialog = await ask({});
    await (await field('[formControlName=mostBins]')).setValue('0');
    await press('Class anew');
    expect(await isOpen()).toBe(true);
    expect(await dialog.getText()).toContain('Between 1 and 50');
    await (await field('[formControlName=mostBins]')).setValue('3');
    await press('Class anew');
    expect((await answer)?.constraints.mostBins).toBe(3);
  });

  it('gives nothing where somebody thinks better of it', async () => {
    await ask({ edits: 1 });
    await press('Cancel');
    expect((await answer) || null).toBeNull();
  });
});
