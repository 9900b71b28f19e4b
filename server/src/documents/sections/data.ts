import type { Writer } from '../page/writer';
import { bytesText, plural, rate, timeText, whole } from '../number-texts';

/** Said of what is not an ISO date alone. */
const dateWords = { 'year-month-day': '', 'day-month-year': ', dates day first', 'month-day-year': ', dates month first' } as const;

/** 6 Data, lineage, quality. */
export function writeData(writer: Writer): void {
  const { input } = writer;
  const { sourceFile, specification } = input;
  writer.beginSection('6', 'Data, lineage, quality');
  if (sourceFile === null) writer.notEvidenced('Source file');
  else {
    writer.text(`One file was read ${writer.cite(sourceFile.evidence)}.`);
    writer.facts([
      ['File', sourceFile.fileName],
      ['Size', `${bytesText(sourceFile.bytes)}; ${plural(sourceFile.rows, 'row')}, ${plural(sourceFile.columns, 'column')}`],
      ['SHA-256', sourceFile.sha256],
      ['Brought in', `${timeText(sourceFile.broughtInAt)} by ${sourceFile.broughtInBy}`],
      [
        'Raw file',
        sourceFile.replicable
          ? 'kept, encrypted: the version can be replicated'
          : (sourceFile.note ?? 'no longer replicable'),
      ],
    ]);
    writer.text(
      sourceFile.sha256 === input.result.dataSha256
        ? 'The fingerprint of the file is the one the result was calculated from.'
        : `The fingerprint of the file differs from the one the result was calculated from (${input.result.dataSha256}).`,
    );
  }
  const { data } = specification;
  writer.facts([
    [
      'Read as',
      `${data.encoding}, delimiter ${data.delimiter === '\t' ? 'tab' : `“${data.delimiter}”`}, decimal sign “${data.decimal}”${dateWords[data.dateOrder ?? 'year-month-day']}${data.dateTimes === 'day' ? ', dates with a time as their day' : ''}${data.notDates ? `; no dates, whatever their form: ${data.notDates.join(', ')}` : ''}`,
    ],
    ['Missing', data.missing.map((token) => (token === '' ? '(empty)' : token)).join(', ')],
  ]);

  writeDictionary(writer);

  writer.heading('Quality by column');
  const { quality } = input;
  if (quality === null) writer.notEvidenced('Quality of the columns');
  else {
    const flagged = quality.columns.filter((column) => column.flags.length > 0);
    writer.table(
      'Columns of the file',
      quality.evidence,
      {
        columns: [
          { title: 'Column', grow: 2 },
          { title: 'Type' },
          { title: 'Role', grow: 1 },
          { title: 'Missing', align: 'right' },
          { title: 'Special', align: 'right' },
          { title: 'Distinct', align: 'right' },
          { title: 'Smallest to largest', grow: 2 },
          { title: 'Flags', grow: 2 },
        ],
        rows: quality.columns.map((column) => ({
          cells: [
            writer.labelWithUnit(column.column),
            column.type,
            column.protected ? `${column.role}, protected` : column.role,
            rate(column.missing, quality.rows),
            rate(
              column.special.reduce((sum, code) => sum + code.rows, 0),
              quality.rows,
            ),
            whole(column.distinct),
            column.smallest === null
              ? column.mostFrequent === null
                ? '–'
                : `most often ${column.mostFrequent}`
              : `${column.smallest} to ${column.largest ?? '–'}`,
            column.flags.length === 0 ? '–' : column.flags.join('; '),
          ],
        })),
      },
      flagged.length === 0
        ? 'No column is flagged.'
        : `${plural(flagged.length, 'column')} of ${whole(quality.columns.length)} ${flagged.length === 1 ? 'is' : 'are'} flagged.`,
    );
    writeSpecialCodes(writer);
  }
  writeProtection(writer);
  writeFlags(writer);
  writer.authorTexts(6, ['Suitability of the sources']);
}

/** How the columns of the file are called elsewhere in the document. */
function writeDictionary(writer: Writer): void {
  const { dictionary, columns } = writer.input;
  writer.heading('Data dictionary');
  if (dictionary === null) {
    writer.notEvidenced('Data dictionary');
    return;
  }
  const named = new Map(columns.map((entry) => [entry.column, entry]));
  const described = new Set(dictionary.lines.map(({ column }) => column));
  const without = columns.filter(({ column }) => !described.has(column));
  writer.table(
    'Columns by their names',
    dictionary.evidence,
    {
      columns: [{ title: 'Column', grow: 1 }, { title: 'Label', grow: 1 }, { title: 'Unit' }, { title: 'Description', grow: 3 }],
      rows: dictionary.lines.map(({ column, description }) => ({
        cells: [column, writer.label(column), named.get(column)?.unit ?? '–', description || '–'],
      })),
    },
    without.length === 0
      ? 'Every column of the file is described.'
      : `${plural(without.length, 'column')} ${without.length === 1 ? 'is' : 'are'} not described and stand${without.length === 1 ? 's' : ''} under ${without.length === 1 ? 'its heading' : 'their headings'}.`,
  );
}

/** What is protected, who permitted what of it with which citation, and what is flagged no longer. */
function writeProtection(writer: Writer): void {
  const { quality, protection, specification } = writer.input;
  const flagged = quality?.columns.filter((column) => column.protected) ?? [];
  if (flagged.length === 0 && !protection?.unflagged.length) return;
  writer.heading('Protected columns');
  if (quality !== null && flagged.length > 0) {
    const used = new Set(specification.characteristics.map(({ column }) => column));
    const inFit = flagged.filter(({ column }) => used.has(column)).map(({ column }) => writer.label(column));
    writer.text(
      `Protected columns: ${flagged.map(({ column }) => writer.label(column)).join(', ')} ${writer.cite(quality.evidence)}. ` +
        (inFit.length === 0
          ? 'None of them is among the characteristics of the specification.'
          : `${inFit.join(', ')} ${inFit.length === 1 ? 'stands' : 'stand'} among the characteristics, by permission of compliance alone.`),
    );
  }
  if (protection === null) {
    writer.notEvidenced('Who permitted a protected column');
    return;
  }
  if (protection.acts.length === 0) writer.text(`Compliance has permitted none ${writer.cite(protection.evidence)}.`);
  else {
    writer.table('What compliance permitted and withdrew', protection.evidence, {
      columns: [{ title: 'Column', grow: 1 }, { title: 'Act' }, { title: 'Citation', grow: 2 }, { title: 'Reason', grow: 2 }, { title: 'By', grow: 1 }],
      rows: protection.acts.map(({ column, act, citation, reason, by, at, holds }) => ({
        cells: [writer.label(column), holds ? `${act}, holds` : act, citation, reason, `${by}, ${timeText(at)}`],
      })),
    });
  }
  if (protection.unflagged.length > 0) {
    writer.caution(
      `Protected in an earlier definition of this model, and flagged no longer: ${protection.unflagged
        .map(({ column, role, sample, definition, reason }) => `${writer.label(column)} (${role}; flagged by definition ${definition} of sample ${sample}${reason === null ? '; no reason is given' : `; ${reason}`})`)
        .join(', ')}.`,
    );
  }
}

/** What the quality report raised of columns that take part, and how each was answered. */
function writeFlags(writer: Writer): void {
  const { qualityFlags } = writer.input;
  writer.heading('Flags of the quality report');
  if (qualityFlags === null) {
    writer.notEvidenced('Quality report');
    return;
  }
  const shown = qualityFlags.flags.filter(({ takesPart, weight, answer }) => takesPart && (weight !== 'note' || answer !== null));
  const apart = qualityFlags.flags.length - shown.length;
  const rest = `${plural(apart, 'further flag')} ${apart === 1 ? 'is' : 'are'} a note or of a column that takes no part.`;
  if (shown.length === 0) {
    writer.text(`No flag asks for an answer ${writer.cite(qualityFlags.evidence)}. ${apart > 0 ? rest : ''}`.trim());
    return;
  }
  const open = shown.filter(({ answer }) => answer === null).length;
  writer.table(
    'Flags and answers',
    qualityFlags.evidence,
    {
      columns: [
        { title: 'Column', grow: 1 },
        { title: 'Flag', grow: 3 },
        { title: 'Answer', grow: 3 },
        { title: 'By', grow: 1 },
      ],
      rows: shown.map(({ column, finding, answer }) => ({
        cells: [
          column === null ? 'The file' : writer.label(column),
          finding,
          answer === null ? 'no answer' : `${answer.answer}: ${answer.reason}`,
          answer === null ? '–' : `${answer.by}, ${timeText(answer.at)}`,
        ],
      })),
    },
    `${open === 0 ? 'Every one is answered.' : `${plural(open, 'flag')} of ${whole(shown.length)} ${open === 1 ? 'has' : 'have'} no answer.`}${apart > 0 ? ` ${rest}` : ''}`,
  );
}

function writeSpecialCodes(writer: Writer): void {
  const { quality } = writer.input;
  if (quality === null) return;
  const rows = quality.columns.flatMap((column) =>
    column.special.map((code) => ({
      cells: [
        writer.label(column.column),
        code.code,
        code.meaning,
        code.treatment ?? 'not evidenced',
        whole(code.rows),
        rate(code.rows, quality.rows),
      ],
    })),
  );
  if (rows.length === 0) {
    writer.text(`No special code is stated ${writer.cite(quality.evidence)}.`);
    return;
  }
  writer.table('Special codes', quality.evidence, {
    columns: [
      { title: 'Column', grow: 1 },
      { title: 'Code', align: 'right' },
      { title: 'Meaning', grow: 1 },
      { title: 'Treatment beside a bin of its own', grow: 2 },
      { title: 'Rows', align: 'right' },
      { title: 'Share', align: 'right' },
    ],
    rows,
  });
}
