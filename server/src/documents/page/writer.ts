import { labelWords } from '@tallystone/contracts/samples/labels';
import type { DocumentInput } from '../input';
import { timeText } from '../number-texts';
import { colour, textBottom, type } from '../tokens';
import type { Sheet } from './sheet';
import { prepareTable, type Box, type TableSpec } from './table';

/** Where the numbers of a table or figure come from. */
export type Citation = string | null;
/** The record of actions is the source. */
export const fromRecord = 'record';
/** A list of evidence, which is its own source. */
export const itself = 'itself';

export interface ContentsEntry {
  number: string;
  title: string;
  page: number;
  destination: string;
}

/**
 * The voice of the document: headings, captions with their evidence, findings, cautions. Numbers tables and figures by section and keeps
 * what belongs together on one page.
 */
export class Writer {
  readonly contents: ContentsEntry[] = [];
  private section = '';
  private tables = 0;
  private figures = 0;
  private bookmark: PDFKit.PDFOutline | null = null;
  private waiting: string | null = null;
  private readonly columns: Map<string, DocumentInput['columns'][number]>;

  constructor(
    readonly sheet: Sheet,
    readonly input: DocumentInput,
  ) {
    this.columns = new Map(input.columns.map((entry) => [entry.column, entry]));
  }

  /** The label people use for a column, else its name in the file. */
  label(column: string): string {
    return this.columns.get(column)?.label ?? column;
  }

  /** The same with its unit, where characteristics are listed: "Card utilisation (%)". */
  labelWithUnit(column: string): string {
    return labelWords({ column, label: this.label(column), unit: this.columns.get(column)?.unit ?? '' });
  }

  /** "[E-3]", "[record]" for what the record of actions holds, nothing for a list of evidence itself, or the words that say that there is none. */
  cite(evidence: Citation): string {
    if (evidence === itself) return '';
    return evidence === null ? '[not evidenced]' : `[${evidence}]`;
  }

  beginSection(number: string, title: string): void {
    const { sheet } = this;
    if (sheet.y > textBottom - 260) sheet.newPage();
    else sheet.space(26);
    this.section = number;
    this.tables = 0;
    this.figures = 0;
    const destination = `section-${number}`;
    const page = sheet.place(destination);
    this.contents.push({ number, title, page, destination });
    this.bookmark = sheet.bookmark(`${number} ${title}`.trim());
    this.notchedRule(sheet.y);
    sheet.y += 12;
    const indent = sheet.measure.width('18', 'semibold', type.section.size) + 12;
    sheet.y += type.section.leading;
    sheet.tagged('H1', () => {
      const style = { font: 'semibold' as const, size: type.section.size };
      sheet.lineAt(number, sheet.left, sheet.y - 6, { ...style, colour: colour.primary });
      sheet.lineAt(title, sheet.left + (number === '' ? 0 : indent), sheet.y - 6, style);
    });
    sheet.y += 6;
  }

  /** A rule with one notch: the mark of a step that has been cut. */
  private notchedRule(y: number): void {
    const { sheet } = this;
    const notch = sheet.left + 14;
    sheet.decoration(() => {
      sheet.doc
        .moveTo(sheet.left, y)
        .lineTo(notch - 6, y)
        .lineTo(notch, y + 8)
        .lineTo(notch + 6, y)
        .lineTo(sheet.left + sheet.width, y)
        .lineWidth(1)
        .strokeColor(colour.primary)
        .stroke();
    });
  }

  /** Waits for what it heads, so that it never stands alone at the foot of a page. */
  heading(title: string): void {
    this.waiting = title;
  }

  /** Makes room for a block of this height and draws the heading that waits for it. */
  private startBlock(height: number): void {
    const { sheet } = this;
    const title = this.waiting;
    if (title === null) {
      sheet.ensure(height);
      return;
    }
    this.waiting = null;
    sheet.ensure(height + 32);
    sheet.space(12);
    if (this.bookmark) sheet.bookmark(title, this.bookmark);
    sheet.paragraph(title, { font: 'semibold', ...type.heading, tag: 'H2' });
    sheet.y += 2;
  }

  /** A smaller heading that no bookmark points to. */
  minor(title: string, aside = ''): void {
    const { sheet } = this;
    this.startBlock(64);
    sheet.space(9);
    const size = 10;
    sheet.y += 14;
    sheet.tagged('H3', () => {
      sheet.lineAt(title, sheet.left, sheet.y - 4, { font: 'semibold', size });
      const after = sheet.left + sheet.measure.width(title, 'semibold', size) + 10;
      const room = sheet.left + sheet.width - after;
      const [line] = sheet.measure.lines(aside, 'regular', type.small.size, Math.max(room, 40));
      if (room > 40) sheet.lineAt(line, after, sheet.y - 4, { size: type.small.size, colour: colour.ink2 });
    });
    sheet.y += 1;
  }

  text(words: string): void {
    this.startBlock(30);
    this.sheet.paragraph(words, { width: Math.min(this.sheet.width, 430) });
    this.sheet.y += 4;
  }

  /** Second text: how to read what stands above. */
  note(words: string): void {
    this.startBlock(30);
    this.sheet.paragraph(words, { ...type.small, colour: colour.ink2 });
    this.sheet.y += 4;
  }

  table(title: string, evidence: Citation, spec: TableSpec, finding = ''): void {
    this.tables += 1;
    const table = prepareTable(this.sheet, spec);
    this.caption(`Table ${this.section}.${this.tables}`, title, evidence, finding, table.startHeight + 2);
    table.draw();
  }

  figure(
    title: string,
    evidence: Citation,
    options: { height: number; alt: string; finding?: string },
    draw: (box: Box) => void,
  ): void {
    const { sheet } = this;
    this.figures += 1;
    this.caption(`Figure ${this.section}.${this.figures}`, title, evidence, options.finding ?? '', options.height + 8);
    const box = { x: sheet.left, y: sheet.y + 4, width: sheet.width, height: options.height };
    sheet.tagged('Figure', () => draw(box), {
      alt: options.alt,
      bbox: [box.x, box.y, box.x + box.width, box.y + box.height],
    });
    sheet.y += options.height + 10;
  }

  private caption(name: string, title: string, evidence: Citation, finding: string, keep: number): void {
    const { sheet } = this;
    const findingHeight = finding === '' ? 0 : sheet.height(finding, { ...type.caption, width: 430 });
    this.startBlock(type.caption.leading * 2 + findingHeight + keep + 12);
    sheet.space(8);
    sheet.paragraph(`${name}  ${title} ${this.cite(evidence)}`.trimEnd(), { font: 'semibold', ...type.caption, tag: 'Caption' });
    if (finding !== '') sheet.paragraph(finding, { ...type.caption, colour: colour.ink2, width: 430 });
    sheet.y += 1;
  }

  /** Says in so many words that something is not there. */
  notEvidenced(what: string): void {
    this.barred(`${what}: not evidenced.`, colour.ochre, colour.ochreText);
  }

  caution(words: string): void {
    this.barred(words, colour.ochre, colour.ink);
  }

  /** What stands behind a bar in the margin. */
  quoted(words: string): void {
    this.barred(words, colour.primary, colour.ink);
  }

  private barred(words: string, bar: string, ink: string): void {
    const { sheet } = this;
    const style = { x: sheet.left + 10, width: Math.min(sheet.width - 10, 440), colour: ink };
    this.startBlock(34);
    sheet.space(4);
    const from = { page: sheet.pageNumber, y: sheet.y };
    sheet.paragraph(words, style);
    sheet.marginBar(from, bar);
    sheet.y += 6;
  }

  /** Label and value, line by line. */
  facts(entries: readonly (readonly [string, string])[]): void {
    const { sheet } = this;
    const labelWidth = 128;
    this.startBlock(40);
    sheet.space(2);
    sheet.grouped('Table', () => {
      for (const [index, [label, value]] of entries.entries()) {
        const shown = value === '' ? 'not evidenced' : value;
        const valueStyle = {
          x: sheet.left + labelWidth,
          width: sheet.width - labelWidth,
          size: 9,
          leading: 12.5,
          colour: value === '' ? colour.ochreText : colour.ink,
        };
        // The last two stay together, so that none stands alone at the head of a page.
        sheet.ensure(Math.min(sheet.height(shown, valueStyle), 90) + (index === entries.length - 2 ? 28 : 6));
        sheet.y += 2.5;
        const top = sheet.y;
        sheet.grouped('TR', () => {
          sheet.tagged('TH', () => sheet.lineAt(label, sheet.left, top + 8.8, { size: 9, colour: colour.ink2 }), {
            scope: 'Row',
          });
          sheet.paragraph(shown, { ...valueStyle, tag: 'TD' });
        });
        sheet.y += 2.5;
        sheet.rule(sheet.y);
      }
    });
    sheet.y += 6;
  }

  /** The texts that people wrote for a section; each topic that is wanted and absent says so. */
  authorTexts(section: number, topics: readonly string[]): void {
    const written = this.input.texts.filter((text) => text.section === section);
    const order = [...new Set([...topics, ...written.map((text) => text.topic)])];
    for (const topic of order) {
      const texts = written.filter((text) => text.topic === topic);
      if (texts.length === 0) {
        this.notEvidenced(`${topic} (to be written by the author)`);
        continue;
      }
      for (const text of texts) {
        this.minor(topic, `written by ${text.author}, ${timeText(text.writtenAt)}`);
        this.quoted(text.text);
      }
    }
  }
}
