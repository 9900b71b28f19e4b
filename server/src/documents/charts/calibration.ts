import { wilsonInterval } from '@tallystone/numeric/metrics/intervals';
import type { BandCalibration } from '../input';
import { percent } from '../number-texts';
import type { Sheet } from '../page/sheet';
import type { Box } from '../page/table';
import { colour } from '../tokens';
import { logScale, logTicks, Plot } from './plot';

/** Observed bad rate against mean PD by band on logarithmic axes: on the diagonal, as many bads as expected. */
export function drawCalibration(sheet: Sheet, box: Box, calibrations: readonly BandCalibration[]): void {
  const side = Math.min(box.height - 36, box.width - 60);
  const left = box.x + 40;
  const bottom = box.y + side + 12;
  const plot = new Plot(sheet, box);
  const shares = calibrations.flatMap(({ bands }) =>
    bands.flatMap(({ meanPd, rows, bads }) => [meanPd ?? 0, rows > 0 ? bads / rows : 0].filter((share) => share > 0)),
  );
  const from = Math.max(0.0005, Math.min(0.5, ...shares) / 1.6);
  const to = Math.min(1, Math.max(0.01, ...shares) * 1.6);
  const x = logScale(from, to, left, left + side);
  const y = logScale(from, to, bottom, bottom - side);
  const ticks = logTicks(from, to, [1, 2, 5]);
  const text = (share: number): string => percent(share, share < 0.01 ? 1 : 0);
  plot.leftAxis(left, ticks, y, text, left + side);
  plot.bottomAxis(bottom, left, left + side, ticks, x, text);
  plot.line(
    [
      [left, bottom],
      [left + side, bottom - side],
    ],
    colour.ink2,
    0.7,
    2,
  );
  plot.label('as expected', left + side - 16, bottom - side + 8, { align: 'right' });
  plot.label('mean PD of the band', left + side / 2, bottom + 22, { align: 'centre' });
  plot.label('observed bad rate', box.x, box.y + 5);

  const within = (share: number): number => Math.min(to, Math.max(from, share));
  for (const { partition, bands } of calibrations) {
    for (const { meanPd, rows, bads } of bands) {
      if (meanPd === null || rows === 0 || meanPd <= 0) continue;
      const at = x(within(meanPd));
      if (partition === 'development') {
        const { lower, upper } = wilsonInterval(bads, rows);
        plot.line(
          [
            [at, y(within(lower))],
            [at, y(within(upper))],
          ],
          colour.primary,
          3.2,
        );
        plot.line(
          [
            [at - 5, y(within(bads / rows))],
            [at + 5, y(within(bads / rows))],
          ],
          colour.ink,
          1.4,
        );
      } else if (partition === 'holdOut') {
        plot.circle(at, y(within(bads / rows)), 2.6, colour.ink);
      } else {
        plot.diamond(at, y(within(bads / rows)), 3.4, colour.ink2);
      }
    }
  }
  drawKey(
    plot,
    left + side + 22,
    box.y + 12,
    calibrations.map(({ partition }) => partition),
  );
}

function drawKey(plot: Plot, x: number, top: number, partitions: readonly string[]): void {
  let y = top;
  const entry = (text: string, mark: (middle: number) => void): void => {
    mark(y - 2.5);
    plot.label(text, x + 14, y, { ink: colour.ink, size: 8 });
    y += 15;
  };
  if (partitions.includes('development')) {
    entry('development, with 95 % interval', (middle) => {
      plot.line(
        [
          [x + 4, middle - 5],
          [x + 4, middle + 5],
        ],
        colour.primary,
        3.2,
      );
      plot.line(
        [
          [x - 1, middle],
          [x + 9, middle],
        ],
        colour.ink,
        1.4,
      );
    });
  }
  if (partitions.includes('holdOut')) entry('hold-out', (middle) => plot.circle(x + 4, middle, 2.6, colour.ink));
  if (partitions.includes('outOfTime')) entry('out-of-time', (middle) => plot.diamond(x + 4, middle, 3.4, colour.ink2));
}
