import { shortestPassword } from '@tallystone/contracts/session/schema';

/**
 * Common passwords that are long enough to pass by length alone, and the words that common passwords are made of. From memory of published
 * lists of leaked passwords; kept short, because length does most of the work.
 */
const common = new Set([
  'correcthorsebatterystaple',
  'thequickbrownfoxjumps',
  'thequickbrownfoxjumpsoverthelazydog',
  'loremipsumdolorsitamet',
  'iloveyouiloveyou',
  'tobeornottobethatisthequestion',
]);
const words = [
  'password', 'passwort', 'passphrase', 'welcome', 'letmein', 'letmeinplease', 'iloveyou', 'admin', 'administrator', 'changeme', 'secret', 'default', 'qwerty', 'qwertz', 'azerty',
  'monkey', 'dragon', 'football', 'baseball', 'sunshine', 'princess', 'login', 'please', 'summer', 'winter', 'spring', 'autumn', 'monday', 'january', 'test', 'demo',
  'scorecard', 'credit', 'tallystone', 'tally', 'stone', 'modeller', 'validator', 'compliance', 'auditor',
]; // prettier-ignore
const runs = [
  'abcdefghijklmnopqrstuvwxyz',
  '01234567890123456789',
  'qwertyuiopasdfghjklzxcvbnm',
  'qwertzuiopasdfghjklyxcvbnm',
  '1q2w3e4r5t6y7u8i9o0p',
  '1qaz2wsx3edc4rfv5tgb6yhn7ujm',
];

/** What stays of a password once everything guessable is taken out of it must still be this long. */
const leastOwn = 6;

/**
 * Why a password may not be used, or null. Context words (the person's name and address) count like common ones.
 *
 * @example
 * refusalOf('Tallystone2026!!!', ['Ada Modeller', 'modeller@saltmarsh.example']) // 'It is made of …'
 */
export function refusalOf(password: string, context: readonly string[]): string | null {
  const plain = password.normalize('NFKC').toLowerCase();
  const letters = plain.replace(/[^\p{L}\p{N}]/gu, '');
  if (common.has(letters)) return 'It is among the passwords that are tried first.';
  if (/^(.{1,5}?)\1{2,}.{0,4}$/su.test(plain)) return 'It repeats a few characters over and over.';
  if (new Set(plain).size < 5) return 'It uses too few different characters.';
  const { left, found } = strip(unleet(plain).replace(/[^\p{L}\p{N}]/gu, ''), context);
  if (left.length < leastOwn) {
    return found.length > 0
      ? `It is made of what is guessed first (${found.join(', ')}).`
      : 'It is a run of neighbouring keys or digits.';
  }
  return null;
}

/** Digits and signs that people put in place of letters. */
const unleet = (text: string): string =>
  text.replace(
    /[013457@$]/g,
    (sign) => ({ '0': 'o', '1': 'i', '3': 'e', '4': 'a', '5': 's', '7': 't', '@': 'a', $: 's' })[sign] ?? sign,
  );

function strip(text: string, context: readonly string[]): { left: string; found: string[] } {
  const own = context.flatMap((part) => part.toLowerCase().split(/[^\p{L}\p{N}]+/u)).filter((part) => part.length >= 4);
  const found: string[] = [];
  let left = text;
  for (const word of [...own, ...words].map(unleet).sort((a, b) => b.length - a.length)) {
    if (!left.includes(word)) continue;
    left = left.replaceAll(word, '');
    if (!found.includes(word)) found.push(word);
  }
  for (const run of runs.flatMap((keys) => [keys, [...keys].reverse().join('')]).map(unleet)) left = dropRuns(left, run);
  // Years and numbers at the end are guessed along.
  return { left: left.replace(/[\d]+/g, '').replace(/(.)\1{2,}/gu, '$1'), found };
}

/** Takes out stretches of five or more neighbours in a run of keys. */
function dropRuns(text: string, run: string): string {
  let left = text;
  for (let length = run.length; length >= 5; length--) {
    for (let start = 0; start + length <= run.length; start++) left = left.replaceAll(run.slice(start, start + length), '');
  }
  return left;
}

export const passwordRule = `At least ${shortestPassword} characters, and not one that is guessed first.`;
