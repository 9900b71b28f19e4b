import { TestBed } from '@angular/core/testing';
import { readBench, type FineClasses } from '@tallystone/numeric/bench';
import { metric, fixed } from '../../../ui/numbers';
import { utilisation } from '../testing/characteristics';
import { PartitionFigures } from './partition-figures';

describe('the figures of each partition', () => {
  const rows = async (fine: FineClasses, covered: boolean): Promise<string[][]> => {
    const fixture = TestBed.createComponent(PartitionFigures);
    fixture.componentRef.setInput('reading', readBench(fine, utilisation.current));
    fixture.componentRef.setInput('covered', covered);
    await fixture.whenStable();
    const lines = [...(fixture.nativeElement as HTMLElement).querySelectorAll('tbody tr')];
    return lines.map((line) => [...line.children].map((cell) => cell.textContent?.trim() ?? ''));
  };

  it('stand one under the other, with the change of the rows against development', async () => {
    const { totals, stability } = readBench(utilisation.fine, utilisation.current);
    const [development, holdOut, ...others] = await rows(utilisation.fine, false);
    expect(others).toEqual([]);
    expect(development).toEqual([
      'Development',
      '1\u202F140',
      fixed(totals.development?.goods, 0),
      fixed(totals.development?.bads, 0),
      fixed(totals.development?.informationValue, 3),
      metric(totals.development?.gini),
      '\u2013',
    ]);
    expect(holdOut.slice(0, 2)).toEqual(['Hold-out', '570']);
    expect(holdOut.slice(4)).toEqual([
      fixed(totals.holdOut?.informationValue, 3),
      metric(totals.holdOut?.gini),
      fixed(stability.holdOut, 3),
    ]);
  });

  it('says of covered out-of-time that it is covered, and no figure of it', async () => {
    const covered = await rows(utilisation.fine, true);
    expect(covered[2]).toEqual(['Out-of-time, covered', ...Array<string>(6).fill('\u2013')]);
    // Not even where counts are there: the cover is what is said.
    const opened: FineClasses = { ...utilisation.fine, outOfTime: utilisation.fine.holdOut };
    expect((await rows(opened, true))[2].slice(1)).toEqual(Array<string>(6).fill('\u2013'));
    expect((await rows(opened, false))[2].slice(0, 2)).toEqual(['Out-of-time', '570']);
  });
});
