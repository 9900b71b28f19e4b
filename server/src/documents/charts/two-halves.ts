import type { Sheet } from '../page/sheet';
import type { Box } from '../page/table';
import { colour } from '../tokens';

/**
 * The split tally: one half is the fit, the other its replication. Where they match, the notched edges meet; where they do not, or where one is
 * missing, the halves stand apart in ochre.
 */
export function drawTwoHalves(sheet: Sheet, box: Box, matches: boolean, captions: { upper: string; lower: string }): void {
  const { doc } = sheet;
  const apart = matches ? 1.2 : 11;
  const depth = 5;
  const notches = 9;
  const middle = box.y + box.height / 2;
  const stick = Math.min(14, (box.height - apart) / 2 - depth);
  const width = box.width;
  const edge = (baseline: number): [number, number][] => {
    const points: [number, number][] = [[box.x, baseline]];
    for (let notch = 0; notch < notches; notch += 1) {
      const centre = box.x + ((notch + 0.5) / notches) * width;
      points.push([centre - 6, baseline], [centre, baseline + depth], [centre + 6, baseline]);
    }
    points.push([box.x + width, baseline]);
    return points;
  };
  const upper = edge(middle - apart / 2);
  const lower = edge(middle + apart / 2);
  const fill = (points: [number, number][], ink: string, outline: boolean): void => {
    points.forEach(([x, y], index) => (index === 0 ? doc.moveTo(x, y) : doc.lineTo(x, y)));
    doc.closePath().lineWidth(1);
    if (outline) doc.stroke(ink);
    else doc.fill(ink);
  };
  const ink = matches ? colour.primary : colour.ochre;
  fill([[box.x, middle - apart / 2 - stick], ...upper, [box.x + width, middle - apart / 2 - stick]], ink, false);
  fill([[box.x, middle + apart / 2 + stick + depth], ...lower, [box.x + width, middle + apart / 2 + stick + depth]], ink, true);
  sheet.lineAt(captions.upper, box.x + 6, middle - apart / 2 - stick + 9.5, { size: 7.5, font: 'semibold', colour: '#FFFFFF' });
  sheet.lineAt(captions.lower, box.x + 6, middle + apart / 2 + stick + depth - 4, { size: 7.5, font: 'semibold', colour: ink });
}
