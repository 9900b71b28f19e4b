import type PDFKit from 'pdfkit';
import { fontFiles, type FontName } from '../fonts';

const tabular: PDFKit.Mixins.OpenTypeFeatures[] = ['tnum', 'lnum'];

/** Tabular figures, so that digits stand under digits. Texts without digits go without: pdfkit then keeps their words laid out, which is much faster. */
export const featuresFor = (text: string): PDFKit.Mixins.OpenTypeFeatures[] | undefined =>
  /\d/.test(text) ? tabular : undefined;

/**
 * Breaks texts into lines before anything is drawn, so that heights are known and nothing runs over an edge. Words that are longer than a line
 * (hashes, names without blanks) are broken between characters.
 */
export class Measure {
  private readonly widths = new Map<string, number>();

  constructor(private readonly doc: PDFKit.PDFDocument) {
    for (const [name, file] of Object.entries(fontFiles)) doc.registerFont(name, file);
  }

  width(text: string, font: FontName, size: number): number {
    const key = `${font}\u0000${text}`;
    let unit = this.widths.get(key);
    if (unit === undefined) {
      unit =
        this.doc
          .font(font)
          .fontSize(100)
          .widthOfString(text, { features: featuresFor(text) }) / 100;
      this.widths.set(key, unit);
    }
    return unit * size;
  }

  lines(text: string, font: FontName, size: number, available: number): string[] {
    const lines: string[] = [];
    for (const paragraph of plainText(text).split('\n')) {
      let line = '';
      for (const word of paragraph.split(' ')) {
        const longer = line === '' ? word : `${line} ${word}`;
        if (this.fits(longer, font, size, available)) {
          line = longer;
          continue;
        }
        if (line !== '') lines.push(line);
        line = word;
        while (!this.fits(line, font, size, available)) {
          const length = this.longestStart(line, font, size, available);
          lines.push(line.slice(0, length));
          line = line.slice(length);
        }
      }
      lines.push(line);
    }
    return lines;
  }

  /** Width of the widest line and of the widest word: what a column would like, and the least that breaks no word. */
  extent(text: string, font: FontName, size: number): { natural: number; least: number } {
    let natural = 0;
    let least = 0;
    for (const paragraph of plainText(text).split('\n')) {
      let line = 0;
      const words = paragraph.split(' ');
      for (const word of words) {
        const width = this.width(word, font, size);
        line += width;
        least = Math.max(least, width);
      }
      natural = Math.max(natural, line + (words.length - 1) * this.width(' ', font, size));
    }
    return { natural, least };
  }

  private fits(text: string, font: FontName, size: number, available: number): boolean {
    let sum = 0;
    for (const [index, word] of text.split(' ').entries()) {
      sum += this.width(word, font, size) + (index === 0 ? 0 : this.width(' ', font, size));
    }
    return sum <= available + 0.01;
  }

  private longestStart(word: string, font: FontName, size: number, available: number): number {
    const characters = [...word];
    let taken = '';
    for (const character of characters) {
      if (taken !== '' && this.width(taken + character, font, size) > available) break;
      taken += character;
    }
    return taken.length;
  }
}

/** Line ends made equal; tabs to blanks; control characters, which have no glyph, taken out. */
export function plainText(text: string): string {
  const kept = [...text.replace(/\r\n?/g, '\n').replace(/\t/g, ' ')].filter(
    (character) => character === '\n' || (character >= ' ' && character !== '\u007f'),
  );
  return kept.join('');
}
