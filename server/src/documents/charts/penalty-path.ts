import type { Result, ResultPathPoint } from '@tallystone/contracts/result/types';
import { significant, fixed } from '../number-texts';
import type { Sheet } from '../page/sheet';
import type { Box } from '../page/table';
import { colour } from '../tokens';
import { linearScale, logScale, logTicks, Plot, roundTicks, tickDecimals, type Scale } from './plot';

const devianceHeight = 96;
const coefficientHeight = 150;
const strokeRow = 9.5;
export const mostRows = 36;
const gutter = 92;

/** A characteristic's place on the path: one line per coefficient, the first penalty at which any is not zero. */
interface Trace {
  column: string;
  label: string;
  kept: boolean;
  lines: number[][];
  entersAt: number;
}

/** Own entries alone: a column may be called as something that every object has. */
const coefficientsAt = ({ coefficients }: ResultPathPoint, column: string): number[] =>
  Object.hasOwn(coefficients, column) ? [coefficients[column]].flat() : [0];

function traces(result: Result, label: (column: string) => string): Trace[] {
  const keptNow = result.path.reduce<ResultPathPoint | null>(
    (best, point) =>
      best === null || Math.abs(point.lambda - result.lambda) < Math.abs(best.lambda - result.lambda) ? point : best,
    null,
  );
  return result.characteristics
    .map(({ column }) => {
      const values = result.path.map((point) => coefficientsAt(point, column));
      const width = Math.max(1, ...values.map((entry) => entry.length));
      const entersAt = values.findIndex((entry) => entry.some((value) => value !== 0));
      return {
        column,
        label: label(column),
        kept: keptNow !== null && coefficientsAt(keptNow, column).some((value) => value !== 0),
        lines: Array.from({ length: width }, (_, place) => values.map((entry) => entry[place] ?? 0)),
        entersAt: entersAt < 0 ? Infinity : entersAt,
      };
    })
    .sort((first, second) => first.entersAt - second.entersAt || Number(second.kept) - Number(first.kept));
}

export function penaltyPathHeight(result: Result): number {
  return devianceHeight + coefficientHeight + 44 + strokeRow * Math.min(mostRows, result.characteristics.length) + 10;
}

/** Deviance, coefficients and a tally of strokes over one penalty axis, strong penalties at the left; one notch at the chosen penalty. */
export function drawPenaltyPath(sheet: Sheet, box: Box, result: Result, label: (column: string) => string): void {
  const plot = new Plot(sheet, box);
  const points = result.path.filter((point) => point.lambda > 0);
  const smallest = Math.min(...points.map((point) => point.lambda));
  const largest = Math.max(...points.map((point) => point.lambda));
  const left = box.x + gutter;
  const right = box.x + box.width - 4;
  const x: Scale = largest > smallest ? logScale(largest, smallest, left, right) : () => (left + right) / 2;

  const devianceTop = box.y + 22;
  const devianceBottom = devianceTop + devianceHeight - 22;
  drawDeviance(plot, result, x, devianceTop, devianceBottom, left);

  const all = traces(result, label);
  const top = devianceBottom + 24;
  const bottom = top + coefficientHeight - 24;
  const values = all.flatMap((trace) => trace.lines.flat());
  const from = Math.min(0, ...values);
  const to = Math.max(0.001, ...values);
  const y = linearScale(from, to, bottom, top);
  plot.label('Coefficient', box.x, top + 4, { strong: true, ink: colour.ink });
  const ticks = roundTicks(from, to, 5);
  plot.leftAxis(left, ticks, y, (value) => fixed(value, tickDecimals(ticks)));
  plot.line(
    [
      [left, y(0)],
      [right, y(0)],
    ],
    colour.ink2,
    0.5,
  );
  for (const kept of [false, true]) {
    for (const trace of all.filter((entry) => entry.kept === kept)) {
      for (const line of trace.lines) {
        const visible = result.path.map((point, index) => [point.lambda, line[index]] as const).filter(([lambda]) => lambda > 0);
        plot.line(
          visible.map(([lambda, value]) => [x(lambda), y(value)] as const),
          kept ? colour.primary : '#A7A59E',
          kept ? 1 : 0.6,
        );
      }
    }
  }

  const rowsTop = bottom + 20;
  const shown = all.slice(0, mostRows);
  shown.forEach((trace, row) => {
    const middle = rowsTop + row * strokeRow + strokeRow / 2;
    const [name] = sheet.measure.lines(trace.label, 'regular', 7, gutter - 8);
    plot.label(name, box.x, middle + 2.4, { ink: trace.kept ? colour.ink : colour.ink2 });
    drawStrokes(plot, trace, result, x, middle);
  });
  const axis = rowsTop + shown.length * strokeRow + 4;
  plot.bottomAxis(
    axis,
    left,
    right,
    logTicks(smallest, largest, largest / smallest > 30 ? [1, 3] : [1, 2, 3, 5, 7]),
    x,
    (value) => significant(value, 2),
  );
  plot.label('Penalty', box.x, axis + 11, { strong: true, ink: colour.ink });
  if (result.lambda > 0)
    plot.notch(
      x(Math.min(largest, Math.max(smallest, result.lambda))),
      box.y,
      axis,
      `chosen: penalty ${significant(result.lambda)}`,
    );
}

function drawStrokes(plot: Plot, trace: Trace, result: Result, x: Scale, middle: number): void {
  let free = -Infinity;
  result.path.forEach((point, index) => {
    const active = trace.lines.some((line) => line[index] !== 0);
    if (point.lambda <= 0 || !active || x(point.lambda) < free) return;
    plot.line(
      [
        [x(point.lambda), middle - 3.2],
        [x(point.lambda), middle + 3.2],
      ],
      trace.kept ? colour.primary : '#A7A59E',
      trace.kept ? 1.2 : 0.9,
    );
    free = x(point.lambda) + 4;
  });
}

function drawDeviance(plot: Plot, result: Result, x: Scale, top: number, bottom: number, left: number): void {
  const { box } = plot;
  plot.label('Deviance', box.x, top + 4, { strong: true, ink: colour.ink });
  const validation = result.crossValidation;
  if (validation === null || validation.lambda.length < 2) {
    plot.label('cross-validation: not evidenced', left + 6, (top + bottom) / 2, { ink: colour.ochreText });
    return;
  }
  plot.label('cross-validated', box.x, top + 13);
  const at = validation.lambda
    .map((lambda, index) => ({ lambda, mean: validation.mean[index], error: validation.standardError[index] }))
    .filter((entry) => entry.lambda > 0);
  const from = Math.min(...at.map((entry) => entry.mean - entry.error));
  const to = Math.max(...at.map((entry) => entry.mean + entry.error));
  const y = linearScale(from, to, bottom, top);
  const ticks = roundTicks(from, to, 4);
  plot.leftAxis(left, ticks, y, (value) => fixed(value, tickDecimals(ticks)));
  const upper = at.map((entry) => [x(entry.lambda), y(entry.mean + entry.error)] as const);
  const lower = at.map((entry) => [x(entry.lambda), y(entry.mean - entry.error)] as const);
  plot.area([...upper, ...lower.reverse()], colour.sunk);
  plot.line(
    at.map((entry) => [x(entry.lambda), y(entry.mean)] as const),
    colour.ink,
    1.2,
  );
  const mark = (index: number, text: string, height: number): void => {
    const lambda = validation.lambda[index];
    if (lambda === undefined || lambda <= 0) return;
    plot.line(
      [
        [x(lambda), top],
        [x(lambda), bottom],
      ],
      colour.ink2,
      0.7,
      1.5,
    );
    const room = box.x + box.width - x(lambda) > plot.sheet.measure.width(text, 'regular', 7) + 6;
    plot.label(text, room ? x(lambda) + 4 : x(lambda) - 4, top + height, { align: room ? 'left' : 'right' });
  };
  mark(validation.minimum, 'smallest deviance', 6);
  mark(validation.oneStandardError, 'one standard error', 16);
}
