import { mostHeadingCharacters } from '@tallystone/contracts/samples/reading';
import type { ReadingProblem } from './types';

/** Names that an object cannot safely carry as a key: results are keyed by column. */
const RESERVED = new Set(['__proto__']);

/** Judges the header's names; columns are kept by position, so nothing is lost whatever they are called. */
export function headerProblems(header: readonly string[], line: number): ReadingProblem[] {
  const problems: ReadingProblem[] = [];
  const first = new Map<string, number>();
  header.forEach((name, index) => {
    const position = index + 1;
    if (name === '') {
      problems.push({
        code: 'blank-header',
        message: `Column ${position} has no name; name it in the file.`,
        where: { line, position },
      });
      return;
    }
    if (name.length > mostHeadingCharacters) {
      problems.push({
        code: 'header-too-long',
        message: `The name of column ${position} has ${thousands(name.length)} characters; at most ${thousands(mostHeadingCharacters)} can be used. Shorten it in the file.`,
        where: { line, position, length: name.length },
      });
      return;
    }
    if (RESERVED.has(name)) {
      problems.push({
        code: 'reserved-header',
        message: `Column ${position} is called "${name}", which cannot be used as a name; rename it in the file.`,
        where: { line, position, column: name },
      });
    }
    const earlier = first.get(name);
    if (earlier !== undefined) {
      problems.push({
        code: 'duplicate-header',
        message: `Columns ${earlier} and ${position} are both called "${name}"; rename one in the file.`,
        where: { line, position, column: name },
      });
    } else {
      first.set(name, position);
    }
  });
  return problems;
}

const thousands = (value: number): string => value.toLocaleString('en-GB');
