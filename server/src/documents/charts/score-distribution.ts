import type { ScoreDistribution } from '../input';
import { fixed } from '../number-texts';
import type { Sheet } from '../page/sheet';
import type { Box } from '../page/table';
import { colour } from '../tokens';
import { linearScale, Plot, roundTicks } from './plot';

const share = (counts: readonly number[], index: number): number => {
  const total = counts.reduce((sum, count) => sum + count, 0);
  return total > 0 ? counts[index] / total : 0;
};

/** Goods above and bads below one score axis, each as a share of its own kind; band edges are notches on the axis. */
export function drawScoreDistribution(
  sheet: Sheet,
  box: Box,
  distribution: ScoreDistribution,
  bandEdges: readonly number[],
): void {
  const plot = new Plot(sheet, box);
  const { edges, goods, bads } = distribution;
  const left = box.x + 52;
  const right = box.x + box.width - 2;
  const x = linearScale(edges[0], edges[edges.length - 1], left, right);
  const rule = box.y + box.height - 22;
  const most = Math.max(...goods.map((_, index) => share(goods, index)), ...bads.map((_, index) => share(bads, index)), 1e-9);
  const axis = box.y + (rule - 8 - box.y) / 2;
  const reach = axis - box.y - 3;
  goods.forEach((_, index) => {
    const start = x(edges[index]) + 0.4;
    const width = x(edges[index + 1]) - x(edges[index]) - 0.8;
    const up = (share(goods, index) / most) * reach;
    const down = (share(bads, index) / most) * reach;
    plot.bar(start, axis - 0.6 - up, width, up, colour.good);
    plot.bar(start, axis + 0.6, width, down, colour.bad);
  });
  plot.label('Goods', box.x, axis - reach / 2, { strong: true, ink: colour.good, size: 8 });
  plot.label('Bads', box.x, axis + reach / 2, { strong: true, ink: colour.bad, size: 8 });
  plot.bottomAxis(rule, left, right, roundTicks(edges[0], edges[edges.length - 1], 10), x, (score) => fixed(score, 0));
  plot.label('Score', box.x, rule + 11, { strong: true, ink: colour.ink });
  for (const edge of bandEdges) {
    if (edge <= edges[0] || edge >= edges[edges.length - 1]) continue;
    const at = x(edge);
    plot.area(
      [
        [at - 3.5, rule],
        [at + 3.5, rule],
        [at, rule - 6],
      ],
      colour.ochre,
    );
  }
}
