import { evidenceFingerprint } from '../fingerprints';
import { timeText } from '../number-texts';
import { fromRecord, itself, type Writer } from '../page/writer';

/** 18 Change history and approvals. */
export function writeHistory(writer: Writer): void {
  const { input } = writer;
  writer.beginSection('18', 'Change history and approvals');
  if (input.history === null || input.history.length === 0) writer.notEvidenced('Change history from the record of actions');
  else {
    writer.table('From the record of actions', fromRecord, {
      columns: [
        { title: 'Act', align: 'right' },
        { title: 'When' },
        { title: 'Who', grow: 1 },
        { title: 'What', grow: 3 },
        { title: 'Reason', grow: 3 },
      ],
      rows: input.history.map((entry) => ({
        cells: [String(entry.sequence), timeText(entry.at), entry.by, entry.act, entry.reason ?? '–'],
      })),
    });
  }
  writer.text(
    'The record of actions is append-only and chained: the hash of each act covers the one before, so that an altered, dropped or reordered act shows. The head printed here shows, too, when its tail has been cut.',
  );
  writer.facts([
    ['Record head', `act ${input.recordHead.sequence}`],
    ['Hash', input.recordHead.hash],
  ]);
  writer.authorTexts(18, ['Reasons for changes']);
}

/** Annex: evidence index and glossary. */
export function writeAnnex(writer: Writer): void {
  const { input } = writer;
  writer.beginSection('A', 'Annex');
  writer.heading('Evidence index');
  if (input.evidence.length === 0) writer.notEvidenced('Evidence');
  else {
    writer.table('Evidence of this version', itself, {
      columns: [{ title: 'No.' }, { title: 'What', grow: 1 }, { title: 'SHA-256' }],
      rows: input.evidence.map((item) => ({
        cells: [item.number, `${item.title}\n${item.madeBy}, ${timeText(item.madeAt)}`, item.sha256],
      })),
    });
    writer.facts([['Evidence list', evidenceFingerprint(input.evidence)]]);
    writer.note(
      'The fingerprint of the list is the SHA-256 of the canonical JSON (RFC 8785) of the pairs of number and SHA-256, in order of number.',
    );
  }
  writer.heading('Words');
  writer.facts([
    ['Attribute', 'One bin of a characteristic.'],
    ['AUC', 'The probability that a good scores higher than a bad, ties one half; Gini is 2 AUC − 1.'],
    ['CSI, PSI', 'Σ (a − e) ln(a / e) over bins or bands, e shares on development and a shares on the other rows.'],
    ['KS', 'The largest distance between the distributions of the score of goods and of bads.'],
    ['PD', 'Probability that an applicant becomes bad within the performance window.'],
    ['Points to double', 'Points by which the score rises when the odds good:bad double.'],
    ['WOE, IV', 'Weight of evidence and information value; see section 8.'],
  ]);
}
