/**
 * Writes the small files of intake/ok and intake/not-ok: `npx tsx data-demo/intake/generate.ts`. README.md beside it says what each must
 * yield. Generated, because an editor or a checkout that "repairs" encodings or line ends would spoil them unseen.
 */
import { mkdirSync, writeFileSync } from 'node:fs';
import { dirname } from 'node:path';
import { fileURLToPath } from 'node:url';
import { storedZip } from './stored-zip';

const header = 'application_id,applied_on,home,monthly_income,outcome_12m\n';
const homes = ['owner', 'mortgage', 'private tenant', 'with family'];

/** Forty plain records: goods and bads, no quirk. */
function records(count = 40, outcome = (row: number): string => (row % 5 === 0 ? 'bad' : 'good')): string {
  return Array.from({ length: count }, (_, index) => {
    const row = index + 1;
    const day = String((index % 28) + 1).padStart(2, '0');
    return `SM-${row},2024-03-${day},${homes[index % 4]},${1500 + 37 * index},${outcome(row)}\n`;
  }).join('');
}

const plain = header + records();
const utf8 = (text: string): Buffer => Buffer.from(text, 'utf8');
const utf16be = (text: string): Buffer => Buffer.from(text, 'utf16le').swap16();
/** Windows-1252 agrees with Latin-1 for the letters used here; 0x80 is its euro sign. */
const windows1252 = (text: string): Buffer => Buffer.from(text.replaceAll('€', '\u0080'), 'latin1');

const column = (name: string, values: readonly string[]): Buffer =>
  utf8(
    `application_id,${name},outcome_12m\n` +
      Array.from(
        { length: 40 },
        (_, index) => `SM-${index + 1},${values[index % values.length]},${index % 5 === 0 ? 'bad' : 'good'}\n`,
      ).join(''),
  );

const workbook: Record<string, string> = {
  '[Content_Types].xml':
    '<?xml version="1.0"?><Types xmlns="http://schemas.openxmlformats.org/package/2006/content-types"><Default Extension="rels" ContentType="application/vnd.openxmlformats-package.relationships+xml"/><Override PartName="/xl/workbook.xml" ContentType="application/vnd.openxmlformats-officedocument.spreadsheetml.sheet.main+xml"/></Types>',
  '_rels/.rels':
    '<?xml version="1.0"?><Relationships xmlns="http://schemas.openxmlformats.org/package/2006/relationships"><Relationship Id="rId1" Type="http://schemas.openxmlformats.org/officeDocument/2006/relationships/officeDocument" Target="xl/workbook.xml"/></Relationships>',
  'xl/workbook.xml':
    '<?xml version="1.0"?><workbook xmlns="http://schemas.openxmlformats.org/spreadsheetml/2006/main"><sheets/></workbook>',
};

export function intakeFiles(): Record<string, Buffer> {
  return {
    'ok/plain.csv': utf8(plain),
    'ok/utf8-bom.csv': Buffer.concat([Buffer.from([0xef, 0xbb, 0xbf]), utf8(plain)]),
    'ok/utf16-le.csv': Buffer.concat([Buffer.from([0xff, 0xfe]), Buffer.from(plain, 'utf16le')]),
    'ok/utf16-be.csv': Buffer.concat([Buffer.from([0xfe, 0xff]), utf16be(plain)]),
    'ok/windows-1252-stated.csv': windows1252(plain.replaceAll('with family', 'logé chez ses parents')),
    'ok/crlf.csv': utf8(plain.replaceAll('\n', '\r\n')),
    'ok/no-last-newline.csv': utf8(plain.slice(0, -1)),
    'ok/semicolon.csv': utf8(plain.replaceAll(',', ';')),
    'ok/tab.csv': utf8(plain.replaceAll(',', '\t')),
    'ok/quoted-newlines.csv': utf8(
      `application_id,remark,outcome_12m\n${Array.from(
        { length: 40 },
        (_, index) =>
          `SM-${index + 1},"line one of ${index + 1}\nline ""two"", with a comma",${index % 5 === 0 ? 'bad' : 'good'}\n`,
      ).join('')}`,
    ),
    'ok/decimal-comma.csv': utf8(
      `application_id;payment_to_income;outcome_12m\n${Array.from(
        { length: 40 },
        (_, index) => `SM-${index + 1};${5 + (index % 9)},${index % 10};${index % 5 === 0 ? 'bad' : 'good'}\n`,
      ).join('')}`,
    ),
    'ok/special-codes.csv': column('card_utilisation', ['12.5', '-999', '88', '-997', '43.1', '', 'NA']),
    'ok/constant-and-all-missing.csv': utf8(
      `application_id,currency,remark,outcome_12m\n${Array.from(
        { length: 40 },
        (_, index) => `SM-${index + 1},EUR,,${index % 5 === 0 ? 'bad' : 'good'}\n`,
      ).join('')}`,
    ),
    'ok/formula-like-text.csv': column('remark', ['=1+1', '+44', '-note', '@sum', ' =1+1', 'plain']),
    'not-ok/dangerous-headers.csv': utf8(plain.replace('home', '__proto__').replace('monthly_income', 'constructor')),

    'not-ok/empty.csv': Buffer.alloc(0),
    'not-ok/header-only.csv': utf8(header),
    'not-ok/windows-1252-unstated.csv': windows1252(
      header + records(11) + 'SM-12,2024-03-12,café côté mer,1900,good\n' + records(8),
    ),
    'not-ok/ragged.csv': utf8(
      header + records(10) + 'SM-11,2024-03-11,owner\n' + 'SM-12,2024-03-12,owner,1900,good,extra\n' + records(10),
    ),
    'not-ok/unclosed-quote.csv': utf8(header + records(6) + 'SM-7,2024-03-07,"owner,1722,good\n' + records(10)),
    'not-ok/duplicate-headers.csv': utf8(plain.replace('monthly_income', 'home')),
    'not-ok/blank-header.csv': utf8(plain.replace('monthly_income', ' ')),
    'not-ok/number-tokens.csv': column('monthly_income', ['1500', 'NaN', 'Inf', '1e309', '0x10', '١٢٣', '" "', '1600']),
    'not-ok/mixed-decimals.csv': utf8(
      `application_id;monthly_income;outcome_12m\n${Array.from(
        { length: 40 },
        (_, index) => `SM-${index + 1};${index % 2 === 0 ? '1500,5' : '1500.5'};${index % 5 === 0 ? 'bad' : 'good'}\n`,
      ).join('')}`,
    ),
    'not-ok/ambiguous-dates.csv': column('applied_on', ['03/04/2024', '05/06/2024', '11/12/2024']),
    'not-ok/workbook-named.csv': storedZip(workbook),
    'not-ok/pdf-named.csv': utf8('%PDF-1.7\n1 0 obj\n<< /Type /Catalog >>\nendobj\ntrailer\n<< /Root 1 0 R >>\n%%EOF\n'),
    'not-ok/nul-bytes.csv': utf8(header + records(4) + 'SM-5,2024-03-05,ow\u0000ner,1648,bad\n' + records(4)),
    'not-ok/one-class-outcome.csv': utf8(header + records(40, () => 'good')),
    'not-ok/three-value-outcome.csv': utf8(header + records(40, (row) => ['good', 'bad', 'open'][row % 3])),
    'not-ok/missing-outcome.csv': utf8(header + records(40, (row) => (row % 7 === 0 ? '' : row % 5 === 0 ? 'bad' : 'good'))),
    'not-ok/negative-weights.csv': column('weight', ['1', '-1', 'NaN', '2']),
    'not-ok/zero-weights.csv': column('weight', ['0']),
  };
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  for (const [name, bytes] of Object.entries(intakeFiles())) {
    const file = fileURLToPath(new URL(name, import.meta.url));
    mkdirSync(dirname(file), { recursive: true });
    writeFileSync(file, bytes);
  }
}
