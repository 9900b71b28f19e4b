import type { DocumentInput, Signature } from '../input';
import { evidenceFingerprint } from '../fingerprints';
import { plural, significant, timeText } from '../number-texts';
import { drawTwoHalves } from '../charts/two-halves';
import type { Sheet } from '../page/sheet';
import type { ContentsEntry } from '../page/writer';
import { colour, page } from '../tokens';
import { judgementCaution } from './wording';

/** The notches of a version's life, and the act that cuts each. */
const life: readonly { caption: string; acts: readonly Signature['act'][] }[] = [
  { caption: 'Frozen', acts: ['frozen'] },
  { caption: 'Submitted', acts: ['submitted'] },
  { caption: 'Validation concluded', acts: ['concluded'] },
  { caption: 'Documentation accepted', acts: ['documentation accepted'] },
];

export function drawCover(sheet: Sheet, input: DocumentInput, fixedDate: Date): void {
  const { model, version } = input;
  sheet.newPage();
  sheet.decoration(() => {
    sheet.doc.rect(0, 0, page.width, page.height).fill(colour.paper);
    drawMark(sheet, sheet.left, 58);
  });
  sheet.y = 54;
  sheet.paragraph(input.lender, { font: 'semibold', size: 11, leading: 15, x: sheet.left + 44, width: sheet.width - 44 });
  sheet.paragraph('Model-governance document', {
    size: 11,
    leading: 14,
    x: sheet.left + 44,
    width: sheet.width - 44,
    colour: colour.ink2,
  });

  sheet.y = 150;
  const size = model.name.length > 60 ? 22 : 30;
  for (const line of sheet.measure.lines(model.name, 'semibold', size, sheet.width).slice(0, 3)) {
    sheet.paragraph(line, { font: 'semibold', size, leading: size * 1.15, tag: 'H1' });
  }
  sheet.paragraph(`Version ${version.label} · ${version.state}`, { size: 14, leading: 20, colour: colour.primary });
  if (input.demonstration) {
    sheet.paragraph('Made from the invented data of a demonstration: it describes no lender and no person.', {
      size: 9.5,
      colour: colour.ochreText,
    });
  }

  sheet.y += 34;
  drawLife(sheet, input);
  sheet.y += 22;
  drawHalves(sheet, input);

  sheet.y += 24;
  facts(sheet, [
    ['Inventory number', model.inventoryNumber],
    ['Product, population', `${model.product}; ${model.population}`],
    ['Jurisdiction', model.jurisdiction],
    ['Owner, materiality tier', `${model.owner}; tier ${model.materialityTier}`],
    ['Edition', `${input.edition}, made ${timeText(fixedDate.toISOString())}`],
  ]);
  sheet.y += 20;
  sheet.paragraph('Fingerprints (SHA-256)', { font: 'semibold', size: 10, leading: 14, tag: 'H2' });
  facts(sheet, [
    ['Version', version.fingerprint],
    ['Specification', input.result.specificationSha256],
    ['Result', input.resultSha256],
    ['Data file', input.result.dataSha256],
    ['Evidence list', evidenceFingerprint(input.evidence)],
    [`Record head, act ${input.recordHead.sequence}`, input.recordHead.hash],
  ]);
  sheet.y += 14;
  sheet.paragraph(
    'Every number in this document carries the number of the evidence it comes from, in square brackets; the annex lists each with its fingerprint. Where evidence is missing it says “not evidenced”.',
    { size: 8.5, leading: 11.5, colour: colour.ink2, width: 440 },
  );
  sheet.paragraph(judgementCaution, { size: 8.5, leading: 11.5, colour: colour.ink2, width: 440 });
}

/** The split tally: two halves whose notches meet. */
function drawMark(sheet: Sheet, x: number, y: number): void {
  const { doc } = sheet;
  const edge = [0, 4, 8, 12, 16, 20, 24, 28, 32].map((step, index) => [x + step, y + (index % 2 === 0 ? 9 : 14)] as const);
  doc.moveTo(x, y);
  for (const [left, top] of edge) doc.lineTo(left, top);
  doc
    .lineTo(x + 32, y)
    .closePath()
    .fill(colour.primary);
  doc.moveTo(x + 0.6, y + 23.4);
  for (const [left, top] of edge) doc.lineTo(Math.min(x + 31.4, Math.max(x + 0.6, left)), top + 2.4);
  doc
    .lineTo(x + 31.4, y + 23.4)
    .closePath()
    .lineWidth(1.2)
    .stroke(colour.primary);
}

function drawLife(sheet: Sheet, input: DocumentInput): void {
  const y = sheet.y;
  const step = sheet.width / life.length;
  const cuts = life.map(({ acts }) => [...input.signatures].reverse().find((signature) => acts.includes(signature.act)) ?? null);
  sheet.decoration(() => {
    cuts.forEach((cut, index) => {
      const start = sheet.left + index * step;
      const notch = start + 12;
      sheet.doc
        .moveTo(start, y)
        .lineTo(notch - 6, y)
        .lineTo(notch, y + 9)
        .lineTo(notch + 6, y)
        .lineTo(start + step, y)
        .lineWidth(cut ? 2 : 1)
        .strokeColor(cut ? colour.primary : colour.indeterminate)
        .stroke();
    });
  });
  cuts.forEach((cut, index) => {
    const x = sheet.left + index * step;
    const width = step - 10;
    sheet.tagged('P', () => {
      sheet.lineAt(life[index].caption, x, y - 6, { font: 'semibold', size: 8.5, colour: cut ? colour.primary : colour.ink2 });
      const said = cut ? `${cut.name}\n${timeText(cut.at)}` : 'not yet';
      sheet.measure
        .lines(said, 'regular', 8, width)
        .slice(0, 4)
        .forEach((line, place) =>
          sheet.lineAt(line, x, y + 21 + place * 10.5, { size: 8, colour: cut ? colour.ink : colour.ochreText }),
        );
    });
  });
  sheet.y = y + 48;
}

function drawHalves(sheet: Sheet, input: DocumentInput): void {
  const replication = input.replications[0];
  const matches = input.replications.length > 0 && input.replications.every((entry) => entry.matches);
  const said =
    replication === undefined
      ? 'Replication: not evidenced.'
      : matches
        ? `The two halves match: ${plural(replication.numbersCompared, 'number')} compared, largest difference between coefficients ${significant(replication.largestCoefficientDifference)} [${replication.evidence ?? 'not evidenced'}].`
        : `The two halves do not match: see section 15 [${replication.evidence ?? 'not evidenced'}].`;
  const top = sheet.y;
  sheet.tagged(
    'Figure',
    () =>
      drawTwoHalves(sheet, { x: sheet.left, y: top, width: sheet.width, height: 46 }, matches, {
        upper: 'the fit',
        lower: replication ? 'its replication from the stored raw file' : 'its replication: none yet',
      }),
    { alt: said, bbox: [sheet.left, top, sheet.left + sheet.width, top + 46] },
  );
  sheet.y = top + 54;
  sheet.paragraph(said, { colour: matches ? colour.ink : colour.ochreText });
}

function facts(sheet: Sheet, entries: readonly (readonly [string, string])[]): void {
  sheet.grouped('Table', () => {
    for (const [label, value] of entries) {
      const lines = sheet.measure.lines(value, 'regular', 9, sheet.width - 128).slice(0, 2);
      sheet.grouped('TR', () => {
        sheet.tagged('TH', () => sheet.lineAt(label, sheet.left, sheet.y + 11.5, { size: 9, colour: colour.ink2 }), {
          scope: 'Row',
        });
        sheet.tagged('TD', () =>
          lines.forEach((line, place) => sheet.lineAt(line, sheet.left + 128, sheet.y + 11.5 + 11.5 * place, { size: 9 })),
        );
      });
      sheet.y += 5 + 11.5 * lines.length;
      sheet.rule(sheet.y);
    }
  });
}

/** Fills the page that was kept free for the contents. */
export function drawContents(sheet: Sheet, entries: readonly ContentsEntry[], absent: readonly string[]): void {
  sheet.y = page.top;
  sheet.paragraph('Contents', { font: 'semibold', size: 19, leading: 26, tag: 'H1' });
  sheet.y += 8;
  for (const entry of entries) {
    const baseline = sheet.y + 14;
    sheet.tagged('TOCI', () => {
      sheet.lineAt(entry.number, sheet.left, baseline, { font: 'semibold', size: 10.5, colour: colour.primary });
      sheet.lineAt(entry.title, sheet.left + 34, baseline, { size: 10.5 });
      sheet.lineAt(String(entry.page), sheet.left, baseline, { size: 10.5, align: 'right', width: sheet.width });
    });
    sheet.doc.goTo(sheet.left, sheet.y, sheet.width, 20, entry.destination);
    sheet.y += 20;
    sheet.rule(sheet.y);
  }
  sheet.y += 12;
  sheet.paragraph(`Sections ${absent.join(', ')} of the lender’s outline are not part of this edition.`, {
    size: 9,
    leading: 12.5,
    colour: colour.ink2,
  });
}
