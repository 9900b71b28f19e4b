import { halvesLayout, modellersHalf, openingAt, standOff, validatorsHalf } from './halves-geometry';
import { intervalChart } from './interval-rows';

const commands = (path: string, letter: string): number => path.split(letter).length - 1;

describe('the two halves', () => {
  it('have one tooth and one notch a number', () => {
    const layout = halvesLayout([{ meets: true }, { meets: true }, { meets: true }], 1000);
    expect(commands(modellersHalf(layout), 'l')).toBe(6);
    expect(commands(validatorsHalf(layout), 'l')).toBe(6);
    expect(layout.rows.map(({ y }) => y)).toEqual([24, 58, 92]);
  });

  it('run in parallel, a thin gap apart, where the numbers meet', () => {
    const layout = halvesLayout([{ meets: true }], 1000);
    const edge = (path: string): string => path.slice(path.indexOf('V'), path.lastIndexOf('V'));
    expect(edge(validatorsHalf(layout))).toBe(edge(modellersHalf(layout)));
    expect(layout.gap).toBeLessThan(standOff);
  });

  it('stand off where they do not, and only there', () => {
    const layout = halvesLayout([{ meets: true }, { meets: false }], 1000);
    const right = validatorsHalf(layout);
    expect(commands(right, `h${standOff}`)).toBe(1);
    expect(commands(right, `h-${standOff}`)).toBe(1);
    expect(openingAt(layout, layout.rows[1])).toContain(`M${layout.split + layout.gap + standOff} `);
  });

  it('give each number two lines on a narrow screen', () => {
    expect(halvesLayout([{ meets: true }], 358).rowHeight).toBeGreaterThan(halvesLayout([{ meets: true }], 1000).rowHeight);
  });
});

describe('intervals on a common axis', () => {
  const chart = intervalChart(
    [
      { value: 2, lower: 1, upper: 4 },
      { value: -1, lower: null, upper: null },
    ],
    { left: 100, right: 300, rowHeight: 20, decimals: 0 },
  );
  it('hold zero and every end', () => {
    expect(chart.zero).toBeGreaterThan(100);
    expect(chart.zero).toBeLessThan(chart.rows[0].x);
    expect(chart.rows[1].x).toBeLessThan(chart.zero);
  });
  it('draw no interval where there is none', () => {
    expect(chart.rows[0].path).not.toBeNull();
    expect(chart.rows[1].path).toBeNull();
  });
});
