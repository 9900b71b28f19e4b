import { benchWarnings, readBench, type NumericBins } from '@tallystone/numeric/bench';
import { home, utilisation } from '../testing/characteristics';
import { benchFinding, smoothingWords, trendWords, warningsOf } from './bench-finding';

const say = (fine: typeof utilisation.fine, bins: typeof utilisation.current): string => {
  const reading = readBench(fine, bins);
  return benchFinding(fine, reading, benchWarnings(reading, utilisation.constraints));
};

describe('the sentence over a characteristic', () => {
  it('says how risk runs and whether it holds', () => {
    expect(say(utilisation.fine, utilisation.current)).toBe(
      'Risk rises steadily along the values and holds in hold-out; one bin is smaller than the constraints allow.',
    );
    expect(trendWords(utilisation.fine, readBench(utilisation.fine, utilisation.current))).toBe('numeric, risk rises');
  });

  it('says when hold-out stands the other way round', () => {
    const { holdOut } = utilisation.fine;
    const turned = { ...holdOut, goods: [30, 30, ...holdOut.goods.slice(2)], bads: [20, 20, ...holdOut.bads.slice(2)] };
    expect(
      say({ ...utilisation.fine, holdOut: turned }, {
        ...utilisation.current,
        edges: [20, 50],
      } as NumericBins as typeof utilisation.current),
    ).toContain('Risk rises steadily along the values; the order is reversed in hold-out');
  });

  it('gives the range of categories', () => {
    expect(say(home.fine, home.current)).toMatch(
      /^Bad rate runs from 6\.7.% \(owner\) to 40\.0.% \(other\) and holds in hold-out/,
    );
  });
});

describe('what WOE is calculated with', () => {
  const { fine, current } = utilisation;
  // No bad among missing values of hold-out.
  const none = { ...fine.holdOut, goods: [...fine.holdOut.goods.slice(0, -1), 30], bads: [...fine.holdOut.bads.slice(0, -1), 0] };

  it('is said of each partition: what is added where a bin has no bad, and that nothing is elsewhere', () => {
    const reading = readBench({ ...fine, holdOut: none }, current);
    expect(smoothingWords(reading, 'holdOut')).toBe(
      'For WOE, 0.5 is added to goods and bads of each bin, as one has no good or no bad.',
    );
    expect(smoothingWords(reading, 'development')).toBe(
      'WOE is of the counts as they are; 0.5 is added to goods and bads of each bin only where one has no good or no bad.',
    );
  });

  it('is the amount that the figures were calculated with', () => {
    const reading = readBench({ ...fine, holdOut: none }, current, { amount: 0.25, when: 'zero-cell' });
    expect(smoothingWords(reading, 'holdOut')).toContain('0.25 is added');
  });
});

describe('what is to be looked at', () => {
  it('names bins with numbers as they are read elsewhere', () => {
    const bins: NumericBins = { kind: 'numeric', edges: [20000, 90000], special: ['own'], missing: 'own' };
    const fine = { ...utilisation.fine, edges: utilisation.fine.edges.map((edge) => edge * 1000) };
    const limits = { smallestShare: 0.15, smallestGoods: 1, smallestBads: 1 };
    const [small] = warningsOf(readBench(fine, bins), limits, null);
    expect(small).toMatchObject({ code: 'small-bin', bins: [2] });
    expect(small.message).toMatch(/: 90\u202F000 and over\.$/);
  });
});
