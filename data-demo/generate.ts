/**
 * Writes the demo file of the invented lender Saltmarsh Mutual and its data dictionary beside it: `npx tsx data-demo/generate.ts`.
 * The same seed gives the same bytes on every machine; nothing reads a clock.
 */
import { writeFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { inventApplicant } from './applicant';
import { columns, type Row } from './columns';
import { drawsFrom } from './random';

export const seed = 20250630;
export const applications = 24_000;
export const firstDay = '2022-07-01';
export const lastDay = '2025-06-30';
/** From here on the file drifts: the half-year that serves as out-of-time sample. */
export const turn = '2025-01-01';

const day = 86_400_000;
const isoDay = (days: number): string => new Date(Date.parse(firstDay) + days * day).toISOString().slice(0, 10);

/** Days of application, ascending: a growing trade that is quieter on Sundays (the first day of the file is a Friday). */
function applicationDays(draws: ReturnType<typeof drawsFrom>): number[] {
  const span = (Date.parse(lastDay) - Date.parse(firstDay)) / day + 1;
  const days: number[] = [];
  while (days.length < applications) {
    const candidate = Math.floor(draws.uniform() * span);
    const keep = (0.72 + (0.28 * candidate) / span) * (candidate % 7 === 2 ? 0.35 : 1);
    if (draws.chance(keep)) days.push(candidate);
  }
  return days.sort((first, second) => first - second);
}

const quoted = (field: string): string => (/[",\n]/.test(field) ? `"${field.replaceAll('"', '""')}"` : field);
const line = (fields: readonly string[]): string => `${fields.map(quoted).join(',')}\n`;

export function demoRows(): Row[] {
  const draws = drawsFrom(seed);
  return applicationDays(draws).map((appliedDay, index) => {
    const appliedOn = isoDay(appliedDay);
    return inventApplicant(draws, { number: index + 1, appliedOn, afterTheTurn: appliedOn >= turn });
  });
}

/** The demo file as text: UTF-8, comma, a header row, lines ended by LF. */
export function demoFile(): string {
  const names = columns.map(({ column }) => column);
  return (
    line(names) +
    demoRows()
      .map((row) => line(names.map((name) => row[name])))
      .join('')
  );
}

/** The dictionary as the product takes it in: a line for each column, and one more for each further special code. */
export function dictionaryFile(): string {
  const header = line(['column', 'label', 'unit', 'description', 'code', 'meaning', 'treatment']);
  const none = { code: '', meaning: '', treatment: '' };
  const lines = columns.flatMap(({ column, label, unit, description, specialCodes }) =>
    (specialCodes.length > 0 ? specialCodes : [none]).map(({ code, meaning, treatment }) =>
      line([column, label, unit, description, code, meaning, treatment]),
    ),
  );
  return header + lines.join('');
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  writeFileSync(new URL('saltmarsh-personal-loans.csv', import.meta.url), demoFile());
  writeFileSync(new URL('dictionary.csv', import.meta.url), dictionaryFile());
}
