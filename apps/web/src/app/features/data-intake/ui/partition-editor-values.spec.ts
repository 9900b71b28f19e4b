import { type ComponentFixture, TestBed } from '@angular/core/testing';
import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { DraftPartition } from '@tallystone/contracts/samples/definition';
import { PartitionEditor } from './partition-editor';

describe('a partition by the values of a column', () => {
  let fixture: ComponentFixture<PartitionEditor>;
  const partition: DraftPartition = { by: 'column', development: ['dev'], holdOut: ['test', 'valid'], outOfTime: [] };
  const shown = (): string => (fixture.nativeElement as HTMLElement).textContent.replace(/\s+/g, ' ');
  const rows = (): string[] =>
    [...(fixture.nativeElement as HTMLElement).querySelectorAll('.row')].map(
      (row) => `${row.querySelector('.value')?.textContent}: ${row.querySelector('.ts-number, .absent')?.textContent}`,
    );
  function show(column: Partial<ColumnProfile>): void {
    fixture = TestBed.createComponent(PartitionEditor);
    const profile = { column: 'split', rows: 1000, missingTokens: [], valuesComplete: true, ...column };
    fixture.componentRef.setInput('partition', partition);
    fixture.componentRef.setInput('column', profile);
    fixture.componentRef.setInput('editable', true);
    fixture.detectChanges();
  }
  const values = [
    { value: 'dev', count: 500 },
    { value: 'test', count: 250 },
  ];

  it('gives the missing ones a part, too, and lists what is not in the file', () => {
    show({ distinct: 2, mostFrequent: values, missing: 250, missingTokens: [{ value: '', count: 250 }] });
    expect(rows()).toEqual(['dev: 500', 'test: 250', 'empty: 250', 'valid: not in this file']);
    const told: DraftPartition[] = [];
    fixture.componentInstance.changed.subscribe((change) => told.push(change));
    const empty = (fixture.nativeElement as HTMLElement).querySelector('[aria-label="empty means"]');
    [...(empty?.querySelectorAll('button') ?? [])].find(({ textContent }) => textContent.trim() === 'Out-of-time')?.click();
    expect(told).toEqual([{ ...partition, outOfTime: [''] }]);
    expect(shown()).not.toContain('not listed here');
  });

  it('says that there are more values than are listed, and what to do', () => {
    show({ distinct: 61, mostFrequent: values, valuesComplete: false });
    expect(shown()).toContain(
      'split has 61 different values, and 59 of them are not listed here: rows with those are in no partition. Give',
    );
    expect(rows().at(-1)).toBe('valid: not among those listed');
  });
});
