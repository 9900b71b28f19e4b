import PDFDocument from 'pdfkit';
import type PDFKit from 'pdfkit';
import type { FontName } from '../fonts';
import { colour, page, textBottom, textWidth, type } from '../tokens';
import { featuresFor, Measure } from './measure';

export interface TextStyle {
  font?: FontName;
  size?: number;
  leading?: number;
  colour?: string;
  x?: number;
  width?: number;
  align?: 'left' | 'right' | 'centre';
  /** The structure tag, "P" unless said otherwise. */
  tag?: string;
}

interface SheetFacts {
  title: string;
  author: string;
  subject: string;
  fixedDate: Date;
}

/** What pdfkit 0.20 reads of a structure element; its published types know only some of it. */
interface StructureOptions {
  alt?: string;
  scope?: 'Row' | 'Column';
  /** Left, top, right, bottom in page coordinates from the top. */
  bbox?: [number, number, number, number];
}

/**
 * The paper and the pen: a cursor that runs down tagged pages. Everything that carries meaning is drawn inside `tagged`, everything that
 * does not (rules, ground) inside `decoration`, so that a screen reader hears the text in order and nothing else.
 */
export class Sheet {
  readonly doc: PDFKit.PDFDocument;
  readonly measure: Measure;
  y: number = page.top;
  private readonly root: PDFKit.PDFStructureElement;
  private parents: PDFKit.PDFStructureElement[];
  private readonly chunks: Buffer[] = [];
  private readonly finished: Promise<Buffer>;

  constructor(facts: SheetFacts) {
    this.doc = new PDFDocument({
      size: 'A4',
      margin: 0,
      autoFirstPage: false,
      bufferPages: true,
      pdfVersion: '1.7',
      tagged: true,
      lang: 'en-GB',
      displayTitle: true,
      font: undefined,
      info: {
        Title: facts.title,
        Author: facts.author,
        Subject: facts.subject,
        Creator: 'Tallystone',
        Producer: 'Tallystone',
        CreationDate: facts.fixedDate,
        ModDate: facts.fixedDate,
      },
    });
    this.finished = new Promise((resolve, reject) => {
      this.doc.on('data', (chunk: Buffer) => this.chunks.push(chunk));
      this.doc.on('end', () => resolve(Buffer.concat(this.chunks)));
      this.doc.on('error', reject);
    });
    this.measure = new Measure(this.doc);
    this.root = this.doc.struct('Document');
    this.doc.addStructure(this.root);
    this.parents = [this.root];
  }

  get left(): number {
    return page.left;
  }

  get width(): number {
    return textWidth;
  }

  get pageNumber(): number {
    return this.doc.bufferedPageRange().count;
  }

  newPage(): void {
    this.doc.addPage();
    this.y = page.top;
  }

  /** Leaves white space, unless the cursor is at the head of a page. */
  space(height: number): void {
    if (this.y > page.top) this.y += height;
  }

  /** Starts a new page when less than this is left. */
  ensure(height: number): void {
    if (this.y + height > textBottom && this.y > page.top) this.newPage();
  }

  get roomLeft(): number {
    return textBottom - this.y;
  }

  /** Draws inside a structure element of its own. */
  tagged(tag: string, draw: () => void, options: StructureOptions = {}): void {
    const content = this.doc.markStructureContent(tag);
    draw();
    this.doc.endMarkedContent();
    this.parent.add(this.doc.struct(tag, options, [content]));
  }

  /** Groups what `draw` adds under one structure element (Sect, Table, TR). */
  grouped(tag: string, draw: () => void): void {
    const group = this.doc.struct(tag);
    this.parent.add(group);
    this.parents.push(group);
    draw();
    this.parents.pop();
    group.end();
  }

  /** Opens a group to be filled later, on a page that waits for it, so that it keeps its place in the reading order. */
  reserve(tag: string): (draw: () => void) => void {
    const group = this.doc.struct(tag);
    this.parent.add(group);
    return (draw) => {
      this.parents.push(group);
      draw();
      this.parents.pop();
      group.end();
    };
  }

  decoration(draw: () => void): void {
    this.doc.markContent('Artifact', { type: 'Layout' });
    draw();
    this.doc.endMarkedContent();
  }

  private get parent(): PDFKit.PDFStructureElement {
    return this.parents[this.parents.length - 1];
  }

  /** One line at a baseline; the caller has tagged it. */
  lineAt(text: string, x: number, baseline: number, style: TextStyle = {}): void {
    const { font = 'regular', size = type.body.size, colour: ink = colour.ink, align = 'left', width = 0 } = style;
    const own = align === 'left' ? 0 : this.measure.width(text, font, size);
    const start = align === 'right' ? x + width - own : align === 'centre' ? x + (width - own) / 2 : x;
    this.doc
      .font(font)
      .fontSize(size)
      .fillColor(ink)
      .text(text, start, baseline, { lineBreak: false, baseline: 'alphabetic', features: featuresFor(text) });
  }

  /** A paragraph that runs over pages where it must, never leaving one line alone at a page's foot. */
  paragraph(text: string, style: TextStyle = {}): void {
    const {
      font = 'regular',
      size = type.body.size,
      leading = type.body.leading,
      x = this.left,
      width = this.width,
      tag = 'P',
    } = style;
    const lines = this.measure.lines(text, font, size, width);
    this.ensure(leading * Math.min(2, lines.length));
    this.tagged(tag, () => {
      for (const line of lines) {
        if (this.y + leading > textBottom) {
          this.doc.continueOnNewPage();
          this.y = page.top;
        }
        this.y += leading;
        this.lineAt(line, x, this.y - (leading - size) / 2 - size * 0.22, { ...style, x, width, font, size });
      }
    });
  }

  height(text: string, style: TextStyle = {}): number {
    const { font = 'regular', size = type.body.size, leading = type.body.leading, width = this.width } = style;
    return this.measure.lines(text, font, size, width).length * leading;
  }

  rule(
    y: number,
    ink: string = colour.hairline,
    weight = 0.5,
    from: number = this.left,
    to: number = this.left + this.width,
  ): void {
    this.decoration(() => {
      this.doc.moveTo(from, y).lineTo(to, y).lineWidth(weight).strokeColor(ink).stroke();
    });
  }

  /** Adds a bookmark that leads to the cursor. */
  bookmark(title: string, under: PDFKit.PDFOutline = this.doc.outline): PDFKit.PDFOutline {
    const options = { expanded: false, top: Math.max(0, this.y - 12) };
    return under.addItem(title, options);
  }

  /** Draws a vertical bar in the margin of every page from one cursor place to another. */
  marginBar(from: { page: number; y: number }, ink: string): void {
    const last = this.pageNumber;
    for (let number = from.page; number <= last; number += 1) {
      const top = number === from.page ? from.y : page.top;
      const bottom = number === last ? this.y : textBottom;
      this.doc.switchToPage(number - 1);
      this.decoration(() => this.doc.rect(this.left, top + 1, 2, Math.max(0, bottom - top - 1)).fill(ink));
    }
  }

  /** Marks the place for links and the outline; answers with the page's number, from 1. */
  place(name: string): number {
    this.doc.addNamedDestination(name, 'XYZ', 0, Math.max(0, this.y - 16), 0);
    return this.pageNumber;
  }

  async finish(): Promise<Buffer> {
    this.root.end();
    this.doc.end();
    return this.finished;
  }
}
