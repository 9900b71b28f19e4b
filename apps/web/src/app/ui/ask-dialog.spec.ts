import { type HarnessLoader } from '@angular/cdk/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { ChangeDetectionStrategy, Component, inject } from '@angular/core';
import { type ComponentFixture, TestBed } from '@angular/core/testing';
import { MatButtonHarness } from '@angular/material/button/testing';
import { MatDialogHarness } from '@angular/material/dialog/testing';
import { MatInputHarness } from '@angular/material/input/testing';
import { MatRadioButtonHarness } from '@angular/material/radio/testing';
import { Ask } from './ask';
import { type Answer, type Question } from './ask-dialog';

@Component({ changeDetection: ChangeDetectionStrategy.OnPush, template: '' })
class Host {
  readonly ask = inject(Ask);
}

describe('Ask', () => {
  let fixture: ComponentFixture<Host>;
  let loader: HarnessLoader;

  beforeEach(() => {
    fixture = TestBed.createComponent(Host);
    loader = TestbedHarnessEnvironment.documentRootLoader(fixture);
  });

  async function put(question: Question): Promise<{ dialog: MatDialogHarness; answer: Promise<Answer | null> }> {
    const answer = fixture.componentInstance.ask.for(question);
    await vi.waitFor(async () => expect(await loader.getAllHarnesses(MatDialogHarness)).toHaveLength(1), { timeout: 10_000 });
    return { dialog: await loader.getHarness(MatDialogHarness), answer };
  }

  it('gives null when the person thinks better of it', async () => {
    const { dialog, answer } = await put({ title: 'Freeze?', accept: 'Freeze' });
    expect(await dialog.getTitleText()).toBe('Freeze?');
    await (await dialog.getHarness(MatButtonHarness.with({ text: 'Cancel' }))).click();
    expect(await answer).toBeNull();
  });

  it('does not go on without a reason that is owed', async () => {
    const { dialog, answer } = await put({ title: 'Open?', accept: 'Open', reason: { label: 'Why now', required: true } });
    const accept = await dialog.getHarness(MatButtonHarness.with({ text: 'Open' }));
    const field = await dialog.getHarness(MatInputHarness);
    await field.setValue('   ');
    await accept.click();
    expect(await loader.getAllHarnesses(MatDialogHarness)).toHaveLength(1);
    await field.setValue('  Last look before freezing ');
    await accept.click();
    expect(await answer).toEqual({ reason: 'Last look before freezing' });
  });

  it('takes no reason of its list for given before one is chosen', async () => {
    const { dialog, answer } = await put({
      title: 'Leave it out?',
      accept: 'Leave out',
      reason: { label: 'Why', choices: ['Tells nobody apart', 'Not known at application'], text: true, required: true },
    });
    const accept = await dialog.getHarness(MatButtonHarness.with({ text: 'Leave out' }));
    await accept.click();
    expect(await loader.getAllHarnesses(MatDialogHarness)).toHaveLength(1);
    expect(await dialog.getText()).toContain('Say why; it is kept in the record.');
    await (await dialog.getHarness(MatRadioButtonHarness.with({ label: 'Not known at application' }))).check();
    expect(await dialog.getText()).not.toContain('Say why');
    await accept.click();
    expect(await answer).toEqual({ reason: 'Not known at application' });
  });

  it('offers a short list and opens the text for another reason', async () => {
    const { dialog, answer } = await put({
      title: 'Keep this cut?',
      accept: 'Keep',
      reason: { label: 'Because', choices: ['Policy', 'Stable over time'], text: true, required: true },
    });
    expect(await dialog.getAllHarnesses(MatInputHarness)).toHaveLength(0);
    await (await dialog.getHarness(MatRadioButtonHarness.with({ label: 'Another reason' }))).check();
    await (await dialog.getHarness(MatInputHarness)).setValue('Agrees with the bureau');
    await (await dialog.getHarness(MatButtonHarness.with({ text: 'Keep' }))).click();
    expect(await answer).toEqual({ reason: 'Agrees with the bureau' });
  });
});
