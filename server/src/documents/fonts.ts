import { createRequire } from 'node:module';
import { dirname, join } from 'node:path';

/** The full TrueType files: woff2 fails in pdfkit and the web subsets lack signs that are used here. */
export type FontName = 'regular' | 'semibold' | 'italic';

const folder = join(dirname(createRequire(import.meta.url).resolve('source-sans/package.json')), 'TTF');

export const fontFiles: Record<FontName, string> = {
  regular: join(folder, 'SourceSans3-Regular.ttf'),
  semibold: join(folder, 'SourceSans3-Semibold.ttf'),
  italic: join(folder, 'SourceSans3-It.ttf'),
};
