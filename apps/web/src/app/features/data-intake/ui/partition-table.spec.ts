import { type ComponentFixture, TestBed } from '@angular/core/testing';
import type { DefinitionCounts } from '@tallystone/contracts/samples/definition';
import { provideIcons } from '../../../ui/register-icons';
import { PartitionTable } from './partition-table';

describe('the table of partitions', () => {
  let fixture: ComponentFixture<PartitionTable>;
  const part = (more: object) => ({ rows: 100, goods: 60, bads: 40, indeterminates: 0, weight: 280, badRate: 0.4, ...more });
  const show = (more: object): string => {
    const counts = {
      partitions: {
        development: part(more),
        holdOut: part(more),
        outOfTime: { covered: true, ...part(more), goods: null, bads: null, weight: null, badRate: null },
      },
    } as unknown as DefinitionCounts;
    fixture.componentRef.setInput('counts', counts);
    fixture.detectChanges();
    return (fixture.nativeElement as HTMLElement).textContent;
  };

  beforeEach(() => {
    TestBed.configureTestingModule({ providers: [provideIcons()] });
    fixture = TestBed.createComponent(PartitionTable);
  });

  it('tells the weight and the weighted bad rate beside that of the rows', () => {
    const text = show({ weightedBadRate: 1 / 7 });
    for (const words of ['Weight', 'weighted', '280.0', '14.3', '40.0']) expect(text).toContain(words);
  });

  it('tells neither where nothing is weighted', () => {
    expect(show({})).not.toMatch(/weight/i);
  });
});
