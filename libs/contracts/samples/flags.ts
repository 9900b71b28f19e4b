import type { ColumnRole } from './columns';
import type { QualityFlag } from './quality';

/** Which flags of a quality report concern somebody: the same on the server, on the page and in the document. */

/** Whether a column of this role takes part, so that its flags concern somebody; null stands for the file as a whole. */
export const takesPart = (role: ColumnRole | null | undefined): boolean => role !== 'not used' && role !== 'identifier';

/** Whether a flag still asks somebody: more than a note, without an answer, of the file or of a column that takes part. */
export const waitsForAnswer = (flag: Pick<QualityFlag, 'weight' | 'answer'>, role: ColumnRole | null | undefined): boolean =>
  flag.weight !== 'note' && flag.answer === null && takesPart(role);
