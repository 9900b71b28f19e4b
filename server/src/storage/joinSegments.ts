import { type TextColumn, codesFor } from '../replay/source';
import type { TextSegment } from './segmentCoding';

/** The segments of one column as a whole, with one dictionary: its texts in the order in which the segments bring them. */
export function joinSegments(segments: readonly TextSegment[]): TextColumn {
  const places = new Map<string, number>();
  const texts: string[] = [];
  const mapped = segments.map((segment) =>
    Uint32Array.from(segment.texts, (text) => {
      const known = places.get(text);
      if (known !== undefined) return known;
      places.set(text, texts.length);
      return texts.push(text) - 1;
    }),
  );
  const codes = codesFor(
    texts.length,
    segments.reduce((sum, segment) => sum + segment.codes.length, 0),
  );
  let row = 0;
  segments.forEach((segment, index) => {
    const placesOf = mapped[index];
    const from = segment.codes;
    for (let at = 0; at < from.length; at++) codes[row++] = placesOf[from[at]];
  });
  return { kind: 'texts', codes, texts };
}
