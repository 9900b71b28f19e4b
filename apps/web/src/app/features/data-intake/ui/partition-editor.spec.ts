import { type ComponentFixture, TestBed } from '@angular/core/testing';
import type { DraftPartition } from '@tallystone/contracts/samples/definition';
import { PartitionEditor } from './partition-editor';

describe('PartitionEditor', () => {
  let fixture: ComponentFixture<PartitionEditor>;
  let emitted: DraftPartition[];
  const start: DraftPartition = { by: 'seed', seed: 7, holdOutShare: 0.3, outOfTime: null };
  const show = (partition: DraftPartition): void => {
    fixture.componentRef.setInput('partition', partition);
    fixture.detectChanges();
  };

  beforeEach(() => {
    fixture = TestBed.createComponent(PartitionEditor);
    emitted = [];
    fixture.componentInstance.changed.subscribe((partition) => {
      emitted.push(partition);
      // As the page does: what was taken is what is shown.
      show(partition);
    });
    fixture.componentRef.setInput('editable', true);
    show(start);
  });

  const page = (): HTMLElement => fixture.nativeElement as HTMLElement;
  const field = (label: string): HTMLInputElement =>
    [...page().querySelectorAll('mat-form-field')].find((one) => one.textContent?.includes(label))!.querySelector('input')!;
  const type = (label: string, value: string): void => {
    field(label).value = value;
    field(label).dispatchEvent(new Event('change'));
    fixture.detectChanges();
  };
  const alerts = (): string[] =>
    [...page().querySelectorAll('[role=alert]')].map((alert) => alert.textContent?.replace(/\s+/g, ' ').trim() ?? '');
  const share = 'Hold-out takes a per cent from 0 to 90, and 0 where there is none. Until then it stays 30 per cent.';
  const seed = 'A seed is a whole number from 0 to 4294967295. Until then it stays 7.';

  it.each(['95', '-1', ''])('keeps the hold-out and says why where %j is typed', (value) => {
    type('Hold-out', value);
    expect([emitted, alerts(), field('Hold-out').value]).toEqual([[], [share], value]);
    expect(field('Hold-out').getAttribute('aria-invalid')).toBe('true');
  });

  it.each(['1.5', '-1', '4294967296', ''])('keeps the seed and says why where %j is typed', (value) => {
    type('Seed', value);
    expect([emitted, alerts(), field('Seed').value]).toEqual([[], [seed], value]);
    expect(field('Seed').getAttribute('aria-invalid')).toBe('true');
  });

  it('takes 0 as 0, and a part of a per cent as it is typed', () => {
    type('Hold-out', '0');
    type('Seed', '0');
    type('Hold-out', '33.35');
    expect(emitted.map((partition) => partition.by === 'seed' && [partition.seed, partition.holdOutShare])).toEqual([
      [7, 0],
      [0, 0],
      [0, 0.3335],
    ]);
    expect([alerts(), field('Hold-out').value]).toEqual([[], '33.35']);
  });

  it('forgets what could not be taken once the same as before is typed, and not when the other field changes', () => {
    type('Hold-out', '95');
    type('Seed', '8');
    expect([alerts(), field('Hold-out').value]).toEqual([[share], '95']);
    type('Hold-out', '30');
    expect([alerts(), field('Hold-out').value]).toEqual([[], '30']);
  });

  it('shows what is there when the partition changes from elsewhere', () => {
    type('Seed', '1.5');
    show({ ...start, seed: 9 });
    expect([alerts(), field('Seed').value]).toEqual([[], '9']);
  });
});
