import type { FontName } from '../fonts';
import { colour, page, textBottom, type } from '../tokens';
import type { Sheet } from './sheet';

export interface TableColumn {
  title: string;
  align?: 'left' | 'right';
  /** Takes part in giving and taking room, in proportion. Without it the column is as wide as its widest cell. */
  grow?: number;
}

export interface TableRow {
  cells: string[];
  /** "strong" for sums, "quiet" for what was not kept. */
  tone?: 'strong' | 'quiet';
  /** What the empty first cell of a row stands under; said again when the row comes first on a new page. */
  under?: string;
}

export interface TableSpec {
  columns: TableColumn[];
  rows: TableRow[];
  /** A line above the titles: a title over several columns. */
  spans?: { title: string; columns: number }[];
  width?: number;
  x?: number;
  /** A figure column at the right: each row draws its part, and `axis` what stands under the last row of a page. */
  drawing?: {
    title: string;
    width: number;
    row: (index: number, box: Box) => void;
    axis?: { height: number; draw: (box: Box) => void };
  };
}

export interface Box {
  x: number;
  y: number;
  width: number;
  height: number;
}

interface Cell {
  lines: string[];
  font: FontName;
  align: 'left' | 'right';
}

const { size, leading } = type.table;
const gap = 10;
const above = 3;
const below = 3.5;

/** Column widths that fill the table: natural where there is room, else the growing columns share what the others leave. */
function columnWidths(sheet: Sheet, spec: TableSpec, available: number): number[] {
  const extents = spec.columns.map((column, index) => {
    const title = sheet.measure.extent(column.title, 'semibold', size);
    const cells = spec.rows.map((row) =>
      sheet.measure.extent(row.cells[index] ?? '', row.tone === 'strong' ? 'semibold' : 'regular', size),
    );
    const natural = cells.reduce((most, cell) => Math.max(most, cell.natural), column.grow ? title.natural : title.least);
    const least = cells.reduce((most, cell) => Math.max(most, cell.least), title.least);
    return { natural, least: Math.min(least, 90) };
  });
  const room = available - gap * (spec.columns.length - 1);
  const growing = spec.columns.map((column) => column.grow ?? 0);
  const total = growing.reduce((sum, share) => sum + share, 0);
  const natural = extents.reduce((sum, extent) => sum + extent.natural, 0);
  if (natural <= room) {
    const extra = room - natural;
    return extents.map((extent, index) => extent.natural + (total > 0 ? (extra * growing[index]) / total : 0));
  }
  // Too wide: fixed columns keep their natural width while the growing ones keep at least their widest word; then all give in proportion.
  const fixed = extents.reduce((sum, extent, index) => sum + (growing[index] > 0 ? 0 : extent.natural), 0);
  const leastOfGrowing = extents.reduce((sum, extent, index) => sum + (growing[index] > 0 ? extent.least : 0), 0);
  if (total > 0 && fixed + leastOfGrowing <= room) {
    const spare = room - fixed - leastOfGrowing;
    const wanted = extents.reduce((sum, extent, index) => sum + (growing[index] > 0 ? extent.natural - extent.least : 0), 0);
    return extents.map((extent, index) =>
      growing[index] > 0 ? extent.least + (wanted > 0 ? (spare * (extent.natural - extent.least)) / wanted : 0) : extent.natural,
    );
  }
  const least = extents.reduce((sum, extent) => sum + extent.least, 0);
  if (least <= room) {
    const spare = room - least;
    const wanted = natural - least;
    return extents.map((extent) => extent.least + (wanted > 0 ? (spare * (extent.natural - extent.least)) / wanted : 0));
  }
  return extents.map((extent) => (extent.least * room) / least);
}

/** A table whose lines are broken: how much of it must stand together at its start, and the drawing of it. */
export interface PreparedTable {
  startHeight: number;
  draw: () => void;
}

/** Narrow tables are not drawn out over the page, where the eye would lose the row; those with a figure column fill it. */
function comfortableWidth(sheet: Sheet, spec: TableSpec): number {
  if (spec.drawing) return sheet.width;
  const natural = spec.columns.reduce((sum, column, index) => {
    const cells = spec.rows.map((row) => sheet.measure.extent(row.cells[index] ?? '', 'regular', size).natural);
    return sum + gap + Math.max(sheet.measure.extent(column.title, 'semibold', size).least, ...cells);
  }, -gap);
  return Math.min(sheet.width, Math.max(250, natural * 1.3));
}

/** A table with hairlines; its titles come again on each page. Rows stay whole unless one alone is taller than half a page. */
export function prepareTable(sheet: Sheet, spec: TableSpec): PreparedTable {
  const x = spec.x ?? sheet.left;
  const whole = spec.width ?? comfortableWidth(sheet, spec);
  const available = whole - (spec.drawing ? spec.drawing.width + 2 * gap : 0);
  const widths = columnWidths(sheet, spec, available);
  const lefts = widths.map((_, index) => x + widths.slice(0, index).reduce((sum, width) => sum + width + gap, 0));
  const right = spec.drawing ? x + whole : lefts[lefts.length - 1] + widths[widths.length - 1];
  const figureLeft = x + whole - (spec.drawing?.width ?? 0);
  const breakCell = (text: string, index: number, font: FontName): Cell => ({
    lines: sheet.measure.lines(text, font, size, widths[index]),
    font,
    align: spec.columns[index].align ?? 'left',
  });
  const head = spec.columns.map((column, index) => breakCell(column.title, index, 'semibold'));
  const headLines = Math.max(...head.map((cell) => cell.lines.length));
  const headHeight = (spec.spans ? leading + 3 : 0) + headLines * leading + above + below;
  const rowCells = spec.rows.map((row) =>
    row.cells.map((text, index) => breakCell(text, index, row.tone === 'strong' ? 'semibold' : 'regular')),
  );
  const heightOf = (cells: Cell[]): number => Math.max(...cells.map((cell) => cell.lines.length)) * leading + above + below;

  const drawCells = (cells: Cell[], top: number, tag: 'TH' | 'TD', ink: string, from = 0, to = Infinity): void => {
    cells.forEach((cell, index) => {
      const lines = cell.lines.slice(from, to);
      const isRowHead = tag === 'TD' && index === 0;
      sheet.tagged(
        isRowHead ? 'TH' : tag,
        () => {
          lines.forEach((line, place) => {
            sheet.lineAt(line, lefts[index], top + above + leading * place + size * 0.95, {
              font: cell.font,
              size,
              colour: ink,
              align: cell.align,
              width: widths[index],
            });
          });
        },
        isRowHead ? { scope: 'Row' } : tag === 'TH' ? { scope: 'Column' } : {},
      );
    });
  };

  const drawSpans = (): void => {
    if (!spec.spans) return;
    let column = 0;
    for (const span of spec.spans) {
      const start = lefts[column];
      const end = lefts[column + span.columns - 1] + widths[column + span.columns - 1];
      if (span.title !== '') {
        sheet.tagged(
          'TH',
          () =>
            sheet.lineAt(span.title, start, sheet.y + above + size * 0.95, {
              size,
              colour: colour.ink2,
              align: 'centre',
              width: end - start,
            }),
          {
            scope: 'Column',
          },
        );
        sheet.rule(sheet.y + leading + 4, colour.hairline, 0.5, start, end);
      }
      column += span.columns;
    }
    sheet.y += leading + 3;
  };

  const drawHead = (): void => {
    if (spec.spans) sheet.grouped('TR', drawSpans);
    // Titles stand on the rule, so that short ones line up with long ones.
    const raised = head.map((cell) => ({
      ...cell,
      lines: [...Array<string>(headLines - cell.lines.length).fill(''), ...cell.lines],
    }));
    sheet.grouped('TR', () => {
      drawCells(raised, sheet.y, 'TH', colour.ink);
      if (spec.drawing) {
        const { title, width } = spec.drawing;
        const baseline = sheet.y + above + leading * (headLines - 1) + size * 0.95;
        sheet.tagged(
          'TH',
          () => sheet.lineAt(title, figureLeft, baseline, { size, colour: colour.ink2, align: 'centre', width }),
          { scope: 'Column' },
        );
      }
    });
    sheet.y += headLines * leading + above + below;
    sheet.rule(sheet.y, colour.ink, 0.75, x, right);
  };

  const axisHeight = spec.drawing?.axis?.height ?? 0;
  const bottom = textBottom - axisHeight;
  const drawAxis = (): void => {
    if (!spec.drawing?.axis) return;
    const box = { x: figureLeft, y: sheet.y, width: spec.drawing.width, height: axisHeight };
    sheet.decoration(() => spec.drawing?.axis?.draw(box));
  };
  const roomForLines = (): number => Math.floor((bottom - sheet.y - above - below) / leading);
  const continueTable = (): void => {
    drawAxis();
    sheet.newPage();
    drawHead();
  };

  const first = rowCells.slice(0, 2).reduce((sum, cells) => sum + Math.min(heightOf(cells), 120), 0);
  const all = rowCells.reduce((sum, cells) => sum + heightOf(cells), 0);
  const startHeight = headHeight + (all < 150 ? all : first) + axisHeight;
  const draw = (): void => {
    sheet.ensure(startHeight);
    sheet.grouped('Table', drawRows);
    drawAxis();
    sheet.y += 4 + axisHeight;
  };
  const drawRows = (): void => {
    drawHead();
    rowCells.forEach((cells, index) => {
      const ink = spec.rows[index].tone === 'quiet' ? colour.ink2 : colour.ink;
      const height = heightOf(cells);
      const tall = height > (textBottom - page.top) / 2;
      // The last two rows stay together, so that none stands alone under its titles.
      const following = index === rowCells.length - 2 ? Math.min(heightOf(rowCells[index + 1]), 60) : 0;
      if (sheet.y + height + following > bottom && !tall) {
        continueTable();
        const under = spec.rows[index].under;
        if (under !== undefined) cells[0] = breakCell(`${under} (continued)`, 0, 'regular');
      }
      const count = Math.max(...cells.map((cell) => cell.lines.length));
      let from = 0;
      while (from < count) {
        if (roomForLines() < 1) continueTable();
        const room = roomForLines();
        const to = Math.min(count, from + room);
        sheet.grouped('TR', () => drawCells(cells, sheet.y, 'TD', ink, from, to));
        if (spec.drawing && from === 0) {
          const box = { x: figureLeft, y: sheet.y, width: spec.drawing.width, height: (to - from) * leading + above + below };
          sheet.decoration(() => spec.drawing?.row(index, box));
        }
        sheet.y += (to - from) * leading + above + below;
        from = to;
        if (from < count) continueTable();
      }
      const strongNext = spec.rows[index + 1]?.tone === 'strong';
      const nextStandsUnder = spec.rows[index + 1]?.under !== undefined;
      sheet.rule(sheet.y, strongNext ? colour.ink2 : colour.hairline, 0.5, nextStandsUnder ? lefts[1] : x, right);
    });
  };
  return { startHeight, draw };
}
