import { readBench } from '@tallystone/numeric/bench';
import { home, utilisation } from '../testing/characteristics';
import { categoryOrder, layOut, ladderScale, leastWidth, notchedLine, shownLabels, sizes } from './geometry';

const numeric = layOut(utilisation.fine, utilisation.current, readBench(utilisation.fine, utilisation.current), 1000, 'value');

describe('where the binning figure puts things', () => {
  it('puts cuts on their values, bins between them, special codes and missing behind', () => {
    const [from, to] = numeric.axis;
    expect(numeric.cuts.map(({ edge }) => edge)).toEqual([20, 40]);
    // Values 0 to 100, trimmed to a tenth of the inner range beyond the outermost edges: 2 to 98.
    expect((numeric.cuts[0].x - from) / (to - from)).toBeCloseTo((20 - 2) / 96, 6);
    expect(numeric.columns.map(({ label, bin }) => [label, bin])).toEqual([
      ['under 20', 0],
      ['20 to under 40', 1],
      ['40 and over', 2],
      ['no bureau record', 3],
      ['missing', 4],
    ]);
    for (let index = 1; index < 3; index++) expect(numeric.columns[index].x0).toBe(numeric.columns[index - 1].x1);
    expect(numeric.columns[2].x1).toBe(to);
    expect(numeric.columns[4].x1).toBeLessThanOrEqual(numeric.width);
  });

  it('draws areas as counts, inside the figure, and bads larger by a stated factor', () => {
    for (const one of numeric.classes) {
      expect(one.goods).toBeLessThanOrEqual(sizes.goods);
      expect(one.bads).toBeLessThanOrEqual(sizes.bads);
    }
    const [, second, third] = numeric.classes;
    expect(second.goods / third.goods).toBeCloseTo(94 / 91, 6);
    expect(second.bads / second.goods).toBeCloseTo((6 / 94) * numeric.badsTimes, 6);
    expect([1, 2, 5, 10, 20]).toContain(numeric.badsTimes);
  });

  it('has a scale of values that cuts stand on, and none where classes stand side by side', () => {
    const reading = readBench(utilisation.fine, utilisation.current);
    const { values, cuts, axis } = numeric;
    for (const { edge, x } of cuts) expect(values?.(edge)).toBeCloseTo(x, 6);
    expect(values?.domain().map((value) => values(value))).toEqual([...axis]);
    expect(layOut(utilisation.fine, utilisation.current, reading, 1000, 'rows').values).toBeNull();
    expect(layOut(home.fine, home.current, readBench(home.fine, home.current), 1000, 'value').values).toBeNull();
  });

  it('gives every fine class the same room in the other view', () => {
    const { classes, cuts, axis } = layOut(
      utilisation.fine,
      utilisation.current,
      readBench(utilisation.fine, utilisation.current),
      1000,
      'rows',
    );
    expect((cuts[0].x - axis[0]) / (axis[1] - axis[0])).toBeCloseTo(0.2, 6);
    expect(classes[0].width).toBeCloseTo(classes[5].width, 6);
  });

  it('keeps a slot whose rows count in another bin', () => {
    const bins = { ...utilisation.current, special: [1] } as typeof utilisation.current;
    const { columns } = layOut(utilisation.fine, bins, readBench(utilisation.fine, bins), 1000, 'value');
    expect(columns.map(({ bin }) => bin)).toEqual([0, 1, 2, null, 3]);
  });

  it('gives categories equal slots in order of risk', () => {
    expect(categoryOrder(home.fine, home.current)).toEqual([1, 2, 0, 3]);
    const { columns, classes, axis } = layOut(home.fine, home.current, readBench(home.fine, home.current), 1000, 'value');
    const step = (axis[1] - axis[0]) / 4;
    expect(columns[1].x1 - columns[1].x0).toBeCloseTo(2 * step, 6);
    expect(classes.find(({ label }) => label === 'owner')?.x).toBe(axis[0]);
  });

  it('is never narrower than what fits, and scales log odds over all marks', () => {
    expect(
      layOut(utilisation.fine, utilisation.current, readBench(utilisation.fine, utilisation.current), 200, 'value').width,
    ).toBe(leastWidth(utilisation.fine));
    const scale = ladderScale(readBench(utilisation.fine, utilisation.current), 100);
    for (const { figures } of readBench(utilisation.fine, utilisation.current).bins) {
      const y = scale(figures.holdOut?.logOdds ?? 0);
      expect(y).toBeGreaterThanOrEqual(100);
      expect(y).toBeLessThanOrEqual(100 + sizes.ladder);
    }
  });

  it('notches the line at each cut and leaves out labels that would collide, the selected one last', () => {
    expect(notchedLine([0, 100], [{ x: 50 }], 10)).toBe('M0 10H42L50 21L58 10H100');
    const cuts = [
      { cut: 0, edge: 1, x: 100 },
      { cut: 1, edge: 2, x: 120 },
      { cut: 2, edge: 3, x: 200 },
    ];
    expect([...shownLabels(cuts, null)]).toEqual([0, 2]);
    expect(shownLabels(cuts, 1)).toEqual(new Set([1, 2]));
  });
});
