import type { Encoding } from '@tallystone/contracts/specification/types';
import { byteOrderMark, ENCODING_NAMES, signatureProblem } from './encodings';
import type { ReadingProblem } from './types';

/** So many bytes tell what a file is. */
export const openingBytes = 4096;

/** The first bytes without their byte-order mark, or what shows that the file cannot be read in this encoding. */
export function openFile(first: Buffer, encoding: Encoding): Buffer | ReadingProblem {
  const problem = signatureProblem(first);
  if (problem !== null) return problem;
  const mark = byteOrderMark(first);
  if (mark === null) return first;
  if (mark.encoding === encoding) return first.subarray(mark.length);
  return {
    code: 'wrong-encoding',
    message: `The file says it is ${ENCODING_NAMES[mark.encoding]}, not ${ENCODING_NAMES[encoding]}.`,
    where: { line: 1 },
  };
}
