import { DocumentInput, writtenSections } from './input';
import { evidenceFingerprint, shortHash } from './fingerprints';
import { Sheet } from './page/sheet';
import { Writer } from './page/writer';
import { writeClassing } from './sections/classing';
import { drawContents, drawCover } from './sections/cover';
import { writeData } from './sections/data';
import { writeFinalModel } from './sections/final-model';
import { writeAnnex, writeHistory } from './sections/history';
import { writeMethod } from './sections/method';
import { writeOutcome } from './sections/outcome';
import { writePerformance } from './sections/performance';
import { writePopulation } from './sections/population';
import { writePurpose } from './sections/purpose';
import { writeSample } from './sections/sample';
import { writeSummary } from './sections/summary';
import { writeValidation } from './sections/validation';
import { colour, page } from './tokens';

const outlineSections = 18;

/**
 * The model-governance document of a version, from frozen evidence alone: asks nothing, reads no clock. The same input, fixed date and versions of
 * Node and pdfkit give the same bytes, so its SHA-256 can be checked later.
 *
 * @param input frozen evidence; see input.ts
 * @param options.fixedDate the date that the document bears
 * @returns the PDF (1.7, tagged, with bookmarks)
 * @throws ZodError with every problem of the input and its place
 * @example
 * const bytes = await renderDocument(input, { fixedDate: new Date('2026-11-30T12:00:00Z') });
 */
export async function renderDocument(input: unknown, options: { fixedDate: Date }): Promise<Buffer> {
  const evidence = DocumentInput.parse(input);
  const { model, version } = evidence;
  const sheet = new Sheet({
    title: `${model.name}, version ${version.label}: model-governance document`,
    author: evidence.lender,
    subject: `${model.inventoryNumber}, edition ${evidence.edition}, version fingerprint ${version.fingerprint}`,
    fixedDate: options.fixedDate,
  });
  const writer = new Writer(sheet, evidence);

  sheet.grouped('Sect', () => drawCover(sheet, evidence, options.fixedDate));
  sheet.newPage();
  const contentsPage = sheet.pageNumber;
  const fillContents = sheet.reserve('TOC');

  const sections = [
    writeSummary,
    writePurpose,
    writePopulation,
    writeOutcome,
    writeData,
    writeSample,
    writeClassing,
    writeMethod,
    writeFinalModel,
    writePerformance,
    writeValidation,
    writeHistory,
    writeAnnex,
  ];
  sheet.newPage();
  for (const write of sections) sheet.grouped('Sect', () => write(writer));

  const absent = Array.from({ length: outlineSections }, (_, index) => index + 1).filter(
    (number) => !(writtenSections as readonly number[]).includes(number),
  );
  sheet.doc.switchToPage(contentsPage - 1);
  fillContents(() => drawContents(sheet, writer.contents, absent.map(String)));
  drawFooters(sheet, evidence);
  return sheet.finish();
}

/** Pages of a document made here, read from its page tree. */
export function pagesOf(bytes: Buffer): number {
  const found = /\/Type \/Pages\s+\/Count (\d+)/.exec(bytes.toString('latin1'));
  if (found === null) throw new Error('These bytes have no page tree.');
  return Number(found[1]);
}

/** On every page: which version, which evidence, which record, which page of how many. */
function drawFooters(sheet: Sheet, input: DocumentInput): void {
  const { model, version, recordHead } = input;
  const pages = sheet.pageNumber;
  const marks = [
    `version ${shortHash(version.fingerprint)}`,
    `evidence ${shortHash(evidenceFingerprint(input.evidence))}`,
    `record ${recordHead.sequence} ${shortHash(recordHead.hash)}`,
  ].join('   ');
  const y = page.height - 46;
  for (let number = 1; number <= pages; number += 1) {
    sheet.doc.switchToPage(number - 1);
    sheet.doc.markContent('Artifact', { type: 'Pagination' });
    sheet.doc
      .moveTo(page.left, y)
      .lineTo(page.width - page.right, y)
      .lineWidth(0.5)
      .strokeColor(colour.hairline)
      .stroke();
    const style = { size: 7.5, colour: colour.ink2 };
    const right = `${number} of ${pages}`;
    const room = sheet.width - sheet.measure.width(right, 'regular', 7.5) - 16;
    const [name] = sheet.measure.lines(
      `${input.lender} · ${model.inventoryNumber} ${model.name}, version ${version.label}, edition ${input.edition}`,
      'regular',
      7.5,
      room,
    );
    sheet.lineAt(name, sheet.left, y + 12, style);
    sheet.lineAt(right, sheet.left, y + 12, { ...style, align: 'right', width: sheet.width });
    sheet.lineAt(marks, sheet.left, y + 23, style);
    sheet.doc.endMarkedContent();
  }
}
