import { benchWarnings, readBench, type NumericBins } from '@tallystone/numeric/bench';
import { home, utilisation } from '../testing/characteristics';
import { benchFinding, trendWords } from './bench-finding';

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
