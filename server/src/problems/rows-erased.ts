import { erasedWords } from '@tallystone/contracts/samples/erased-words';
import type { Erasure } from '@tallystone/contracts/samples/erasure';
import { type Problem, conflict } from './problem';

export const rowsErasedCode = 'rows-erased';

/** The one refusal for whatever needs rows that were erased: a policy that looks ahead, a service that starts work, the storage that finds nothing. */
export const rowsErased = (erasure: Erasure): Problem => conflict(rowsErasedCode, erasedWords(erasure));
