import { writeFileSync } from 'node:fs';
import type { Locator, Page } from '@playwright/test';
import { pick } from '../support/browser';
import { enterEmptyModel } from '../support/demo-places';
import { narrow, wide } from '../support/page-inspection';
import { expect, test } from '../support/rooms';

/**
 * What an analyst is asked while a file comes in, and what the pages show of each choice: how it is read, who is in it twice, what is good and bad, who is
 * in which partition, what stands out. One file through all of it, and read again in between.
 */
test.describe.configure({ mode: 'serial', timeout: 60_000 });

interface Applicant {
  readonly id: string;
  readonly branch: string;
  readonly town: string;
  readonly income: string;
  readonly utilisation: string;
  readonly home: string;
  readonly days: number | null;
  readonly months: number;
  readonly part: string;
  /** Day and month could be either way round. */
  readonly day: number;
  readonly month: number;
}

/** Park and Miller, CACM 31, 1988: the same file on every machine. */
let state = 41;
const random = (): number => (state = (state * 48271) % 2147483647) / 2147483647;
const decimals = (value: number): string =>
  value
    .toFixed(2)
    .replace('.', ',')
    .replace(/(\d)(?=\d{3},)/, '$1.');

const applicants = Array.from({ length: 900 }, (_, row): Applicant => {
  const number = 240_011 + row * 7;
  // Most are in order, some are late, and a few very late.
  const days = Math.floor(150 * random() ** 3);
  return {
    // Three come a second time, their identifier written otherwise.
    id: row % 300 === 50 ? `sm ${number - 7}` : `SM-${number}`,
    branch: row % 150 === 9 ? 'B2' : 'B1',
    town: row % 30 === 2 ? 'Sandøre' : row % 30 === 4 ? 'Œdmarsh' : ['Fenwick', 'Lowsand', 'Reedham'][row % 3],
    income: decimals(900 + random() * 4000),
    utilisation: row % 11 === 5 ? 'n/k' : decimals(random() * 100),
    home: ['owner', 'rent', 'parents'][Math.floor(random() * 3)],
    days: row % 200 === 77 ? null : days,
    months: row % 200 === 77 ? 30 : 3 + Math.floor(random() * 40),
    part: row % 10 < 6 ? 'development' : row % 10 < 9 ? 'hold-out' : 'later',
    day: 1 + ((row * 5 + 2) % 12),
    month: 1 + ((Math.floor(row / 12) + 3) % 12),
  };
});

const two = (value: number): string => String(value).padStart(2, '0');
const lines = [
  'application_id;applied_on;branch;town;monthly_income;utilisation;home;days_past_due;months_on_book;sample_part',
  ...applicants.map(({ id, day, month, branch, town, income, utilisation, home, days, months, part }) =>
    [id, `${two(day)}/${two(month)}/2024`, branch, town, income, utilisation, home, days ?? '', months, part].join(';'),
  ),
];
/** Œ stands among the signs that Latin-1 does not have and Windows-1252 does. */
const bytes = Buffer.from(`${lines.join('\r\n')}\r\n`.replaceAll('Œ', '\u008c'), 'latin1');

let sample = '';

const cellsOf = async (row: Locator): Promise<string[]> =>
  (await row.getByRole('cell').allInnerTexts()).map((text) => text.replaceAll('\u2011', '-'));
const rowOf = (table: Locator, name: string | RegExp): Locator =>
  table.getByRole('row').filter({ has: table.page().getByRole('rowheader', { name, exact: true }) });
const columnsOf = (page: Page): Locator => page.getByRole('region', { name: 'Columns of the sample' });
const showColumn = async (page: Page, column: string): Promise<void> => {
  await columnsOf(page).getByRole('button', { name: column, exact: true }).click();
  await expect(page).toHaveURL(new RegExp(`column=${column}`));
};
const saved = (page: Page): Locator => page.getByRole('status').filter({ hasText: /^Saved / });
const toDefinition = async (page: Page): Promise<void> =>
  page.getByRole('link', { name: 'Outcome and partition', exact: true }).click();
const enter = async (field: Locator, text: string): Promise<void> => {
  await field.fill(text);
  await field.blur();
};

test.afterEach(async ({ roomOf }) => {
  expect((await roomOf('modeller')).takeProblems(), 'errors, violations and refused requests').toEqual([]);
});

test('what the file does not say is asked, and the first rows follow each choice', async ({ roomOf }, testInfo) => {
  const { page } = await roomOf('modeller');
  const { id } = await enterEmptyModel(
    page,
    `Credit cards, read in several ways ${Number(process.env['TEST_PARALLEL_INDEX']) + 1}`,
  );
  const file = testInfo.outputPath('saltmarsh-cards.csv');
  writeFileSync(file, bytes);
  await page.goto(`/models/${id}/sample`);
  await page.getByLabel('CSV file').setInputFiles(file);
  await expect(page).toHaveURL(/\/reading$/);
  sample = new URL(page.url()).pathname.replace(/\/reading$/, '');

  const choice = (name: string): Locator => page.getByRole('combobox', { name });
  await expect(choice('Delimiter')).toHaveText(/Semicolon/);
  await expect(choice('Decimal sign')).toHaveText(/Comma/);
  await expect(choice('Thousands sign')).toHaveText(/Point/);
  await expect(choice('Encoding')).toHaveText('Windows-1252');
  await expect(choice('Encoding')).toHaveAccessibleDescription(/not UTF-8/);

  // No date of the file says which way round it is: nothing is guessed.
  const read = page.getByRole('button', { name: 'Read the file', exact: true });
  const question = /03\/04\/2024 in line 2 \(applied_on\) can be day first or month first/;
  await expect(choice('Date order')).toHaveText('Please choose');
  await expect(choice('Date order')).toHaveAccessibleDescription(question);
  await expect(page.getByRole('alert')).toContainText(question);
  await expect(read).toBeDisabled();
  const rows = page.getByRole('region', { name: 'First rows of the file' }).getByRole('row');
  await expect(rows).toHaveCount(21);
  const first = async (): Promise<string[]> => (await cellsOf(rows.nth(1))).slice(0, 5);
  const { id: one, branch, town, income } = applicants[0];
  expect(await first()).toEqual([one, '03/04/2024', branch, town, income]);
  await pick(page, page, 'Date order', /^Month first/);
  await expect.poll(first).toEqual([one, '2024-03-04', branch, town, income]);
  await pick(page, page, 'Date order', /^Day first/);
  await expect.poll(first).toEqual([one, '2024-04-03', branch, town, income]);
  await expect(page.getByRole('alert')).toHaveCount(0);
  await expect(read).toBeEnabled();

  // Read as UTF-8 it has lines that are none: they are shown as they stand, and the file waits.
  const doubtful = page.getByRole('region', { name: 'Doubtful lines', exact: true });
  await expect(doubtful).toHaveCount(0);
  await expect(rows.nth(5)).toContainText('Œdmarsh');
  await pick(page, page, 'Encoding', 'UTF-8');
  const foreign = applicants.flatMap(({ town: name }, row) => (/[^ -~]/.test(name) ? [row + 2] : []));
  await expect(doubtful).toContainText(`${foreign.length} lines of the file are doubtful`);
  const listed = doubtful.getByRole('region', { name: 'Doubtful lines of the file' });
  const bad = listed.locator('tbody').getByRole('row');
  expect(await bad.first().getByRole('rowheader').innerText()).toBe('4');
  expect(await cellsOf(bad.first())).toEqual(['3', 'not UTF-8', lines[3].replace('ø', '\\xF8')]);
  await expect(bad.nth(1)).toContainText('\\x8Cdmarsh');
  // On a narrow screen the line stands below what is said of it, and nothing of it beyond the edge.
  await page.setViewportSize(narrow);
  const places = await bad
    .first()
    .getByRole('cell')
    .evaluateAll((cells) => cells.map((cell) => cell.getBoundingClientRect().top));
  expect(places[2]).toBeGreaterThan(places[1]);
  const [content, room] = await listed.evaluate((region) => [region.scrollWidth, region.clientWidth]);
  expect(content).toBeLessThanOrEqual(room);
  await page.setViewportSize(wide);
  await expect(rows.nth(5)).not.toContainText('Œdmarsh');
  await expect(page.getByRole('alert')).toContainText(
    `line 4 Line 4 is not UTF-8; read as Windows-1252? ${foreign.length} lines in all: ${foreign.slice(0, 20).join(', ')}, …`,
  );
  await expect(read).toBeDisabled();
  await pick(page, page, 'Encoding', 'Windows-1252');
  await expect(doubtful).toHaveCount(0);
  await expect(rows.nth(5)).toContainText('Œdmarsh');
  await expect(read).toBeEnabled();

  await read.click();
  await expect(page).toHaveURL(/\/columns/);
  await expect(columnsOf(page).locator('tbody').getByRole('row')).toHaveCount(10);
  await expect(rowOf(columnsOf(page), 'applied_on')).toContainText('2024\u201101\u201101 to 2024\u201112\u201112');
});

test('identifiers that are one but for how they are written are warned of, with how many they are', async ({ roomOf }) => {
  const { page } = await roomOf('modeller');
  await page.goto(`${sample}/columns`);
  await expect(rowOf(columnsOf(page), 'application_id')).toContainText('near-duplicates');
  await showColumn(page, 'application_id');
  const flags = page.getByRole('list', { name: 'Flags' });
  await expect(flags).toContainText('Look: 3 identifiers differ from others only in how they are written');
  await expect(flags).not.toContainText(applicants[0].id);
});

test('roles and labels are given, and each value of a column stands for a partition', async ({ roomOf }) => {
  const { page } = await roomOf('modeller');
  await page.goto(`${sample}/columns?column=home`);
  await pick(page, page, 'Role', 'segment');
  await enter(page.getByLabel('Label', { exact: true }), 'Home when applying');
  await expect(rowOf(columnsOf(page), 'home')).toContainText('segment');
  await expect(rowOf(columnsOf(page), 'home')).toContainText('Home when applying');
  await expect(rowOf(columnsOf(page), 'sample_part')).toContainText('partition');

  await toDefinition(page);
  await expect(page.getByRole('radio', { name: 'By the values of sample_part' })).toBeChecked();
  const means = (value: string, meaning: string): Locator =>
    page.getByRole('radiogroup', { name: `${value} means` }).getByRole('radio', { name: meaning });
  // Two of the values say themselves what they are; the third has to be told.
  await expect(means('development', 'Development')).toBeChecked();
  await expect(means('hold-out', 'Hold-out')).toBeChecked();
  for (const meaning of ['Development', 'Hold-out', 'Out-of-time']) await expect(means('later', meaning)).not.toBeChecked();
  await means('later', 'Out-of-time').click();
  await expect(means('later', 'Out-of-time')).toBeChecked();
  // Pressed again a meaning is taken back, and given anew by a third press.
  await means('hold-out', 'Hold-out').click();
  await expect(means('hold-out', 'Hold-out')).not.toBeChecked();
  await means('hold-out', 'Hold-out').click();
  await expect(means('hold-out', 'Hold-out')).toBeChecked();
  await expect(saved(page)).toBeVisible();
});

test('an outcome by rule tells what each of its parts takes', async ({ roomOf }) => {
  const { page } = await roomOf('modeller');
  await page.goto(`${sample}/definition`);
  await page.getByRole('radio', { name: /^By rule/ }).check();
  await pick(page, page, 'Column of the days past due', 'days_past_due');
  await pick(page, page, 'Months on book', 'months_on_book');
  await enter(page.getByLabel('Excluded below, months'), '12');
  const given = page.getByRole('region', { name: 'What the rule gives' });
  const problems = page.getByRole('region', { name: 'What it gives' }).getByRole('alert');
  // Nobody is good for want of a number: that has to be said.
  const unknown = applicants.filter(({ days, months }) => months >= 12 && days === null).length;
  expect(unknown).toBeGreaterThan(1);
  await expect(problems).toContainText(`${unknown} rows have days past due that are not a number of at least 0`);
  await expect(page.getByText(/^Counted once the change is saved/)).toBeVisible();
  await expect(page.getByRole('button', { name: 'Confirm the definition' })).toBeDisabled();
  await pick(page, page, 'Where these are missing', 'excluded');
  await expect(problems).toHaveCount(0);

  // What the page counts is counted here again, from the rows of the file.
  const expectRule = async (from: { bad: number; indeterminate: number | null }): Promise<void> => {
    const grey = from.indeterminate ?? from.bad;
    const months = applicants.filter(({ months }) => months < 12).length;
    const known = applicants.filter(({ days, months }) => months >= 12 && days !== null) as (Applicant & { days: number })[];
    const counted = known.filter(({ part }) => part !== 'later');
    const number = (least: number, below: number): number => counted.filter(({ days }) => days >= least && days < below).length;
    const [goods, bads] = [number(0, grey), number(from.bad, Infinity)];
    await expect(page.getByText('of the goods and bads of development and hold-out')).toContainText(
      `Bad rate ${((100 * bads) / (goods + bads)).toFixed(1)}\u202f%`,
    );
    const rows = await Promise.all(
      (await given.locator('tbody').getByRole('row').all()).map(async (row) => [
        await row.getByRole('rowheader').innerText(),
        ...(await cellsOf(row)),
      ]),
    );
    expect(rows).toEqual([
      ['Excluded', 'months_on_book below 12', String(months)],
      ['Excluded', 'missing', String(unknown)],
      ['Bad', `days_past_due of ${from.bad} or more`, String(bads)],
      ...(from.indeterminate === null
        ? []
        : [['Indeterminate', `days_past_due from ${grey} to below ${from.bad}`, String(number(grey, from.bad))]]),
      ['Good', `days_past_due below ${grey}`, String(goods)],
    ]);
    const of = (name: string): Applicant[] => known.filter(({ part }) => part === name);
    const partitions = page.getByRole('region', { name: 'Partitions' });
    for (const [name, part] of [
      ['Development', 'development'],
      ['Hold-out', 'hold-out'],
      ['Out-of-time', 'later'],
    ])
      expect((await cellsOf(rowOf(partitions, new RegExp(`^${name}`))))[0]).toBe(String(of(part).length));
  };
  await expectRule({ bad: 90, indeterminate: 30 });
  await enter(page.getByLabel('Bad from, days past due'), '60');
  await expect(given).toContainText('days_past_due of 60 or more');
  await expectRule({ bad: 60, indeterminate: 30 });
  await enter(page.getByLabel('Indeterminate from; empty = none'), '');
  await expect(given).toContainText('days_past_due below 60');
  await expectRule({ bad: 60, indeterminate: null });
  await enter(page.getByLabel('Indeterminate from; empty = none'), '30');
  await expectRule({ bad: 60, indeterminate: 30 });
  // The outcome of the latest is covered.
  await expect(page.getByRole('region', { name: 'Partitions' })).toContainText('covered');
});

test('read again with another choice, the draft stays, and what cannot stay is told', async ({ roomOf }) => {
  const { page } = await roomOf('modeller');
  await page.goto(`${sample}/definition`);
  const exclusions = page.getByRole('region', { name: 'Exclusions' });
  const exclude = async (
    place: number,
    reason: string,
    column: string,
    test: string,
    field: string,
    value: string,
  ): Promise<void> => {
    await exclusions.getByRole('button', { name: 'Add an exclusion' }).click();
    const rule = exclusions.getByRole('listitem').nth(place);
    await enter(rule.getByLabel('Reason'), reason);
    await pick(rule, page, 'Column', column);
    await pick(rule, page, 'Test', test);
    await enter(rule.getByLabel(field), value);
  };
  await exclude(0, 'Lives with parents, under a scheme of its own', 'home', 'is one of', 'Values, parted by commas', 'parents');
  await exclude(1, 'Before the branches were merged', 'applied_on', 'is below', 'Value', '2024-02-01');
  const gone = applicants.filter(({ home }) => home === 'parents').length;
  const early = applicants.filter(({ home, month }) => home !== 'parents' && month === 1).length;
  const figure = page.getByRole('figure').filter({ has: page.getByRole('heading', { name: 'From the file to development' }) });
  const step = (name: RegExp): Locator => figure.getByRole('img', { name });
  await expect(step(new RegExp(`^Lives with parents, under a scheme of its own: ${gone} rows out`))).toBeVisible();
  await expect(step(new RegExp(`^Before the branches were merged: ${early} rows out`))).toBeVisible();
  await expect(saved(page)).toBeVisible();

  // The column of numbers that has words in it offers to have them read as missing.
  await page.getByRole('link', { name: 'Columns', exact: true }).click();
  await expect(rowOf(columnsOf(page), 'utilisation')).toContainText('categorical');
  await showColumn(page, 'utilisation');
  await page.getByRole('button', { name: 'Read again with n/k as missing' }).click();
  const again = async (): Promise<void> => {
    await page.getByRole('button', { name: 'Read the file again' }).click();
    const dialog = page.getByRole('dialog', { name: 'Read the file again?' });
    await expect(dialog).toContainText('The draft of the definition stays as it is');
    await dialog.getByRole('button', { name: 'Read again' }).click();
    await expect(page).toHaveURL(/\/columns/);
  };
  await expect(page.getByLabel('Missing, beside the empty field')).toHaveValue('n/k');
  await expect(page.getByRole('combobox', { name: 'Date order' })).toHaveText(/^Day first/);
  await again();
  await expect(page.getByText('The file was read again: the draft stayed as it was.', { exact: true })).toBeVisible();
  await expect(rowOf(columnsOf(page), 'utilisation')).toContainText('numeric');
  const expectKept = async (): Promise<void> => {
    await expect(rowOf(columnsOf(page), 'home')).toContainText('segment');
    await expect(rowOf(columnsOf(page), 'home')).toContainText('Home when applying');
    await toDefinition(page);
    await expect(page.getByRole('radio', { name: /^By rule/ })).toBeChecked();
    await expect(page.getByLabel('Bad from, days past due')).toHaveValue('60');
    await expect(page.getByRole('radiogroup', { name: 'later means' }).getByRole('radio', { name: 'Out-of-time' })).toBeChecked();
    await expect(exclusions.getByLabel('Reason').first()).toHaveValue('Lives with parents, under a scheme of its own');
    await expect(step(new RegExp(`^Lives with parents, under a scheme of its own: ${gone} rows out`))).toBeVisible();
  };
  await expectKept();
  await expect(exclusions.getByLabel('Reason')).toHaveCount(2);
  await expect(step(new RegExp(`^Before the branches were merged: ${early} rows out`))).toBeVisible();

  // Dates that are left as text are no dates: what compares them with one has to go, and everything else is still there.
  await page.getByRole('link', { name: 'Reading', exact: true }).click();
  await pick(page, page, 'Date order', /^Year, month, day only/);
  await expect(page.getByRole('region', { name: 'First rows of the file' }).getByRole('row').nth(1)).toContainText('03/04/2024');
  await again();
  await expect(
    page.getByText('The file was read again: the draft stayed as it was but for 2 points.', { exact: true }),
  ).toBeVisible();
  await expect(page.getByRole('listitem').filter({ hasText: 'under these choices' })).toHaveText([
    'applied_on It is categorical under these choices, and was date.',
    'Exclusion “Before the branches were merged” applied_on is categorical under these choices, and cannot be compared with its limit.',
  ]);
  await expectKept();
  await expect(exclusions.getByLabel('Reason')).toHaveCount(1);

  // And back: the column is a date again.
  await page.getByRole('link', { name: 'Reading', exact: true }).click();
  await pick(page, page, 'Date order', /^Day first/);
  await expect(page.getByRole('region', { name: 'First rows of the file' }).getByRole('row').nth(1)).toContainText(
    '2024\u201104\u201103',
  );
  await again();
  await expect(rowOf(columnsOf(page), 'applied_on')).toContainText('application date');
  await expectKept();
});

test('a flag of the quality report is accepted with its reason, and stays answered', async ({ roomOf }) => {
  const { page } = await roomOf('modeller');
  await page.goto(`${sample}/definition`);
  // The balance can be seen before anything is confirmed, and that it was looked at stays with the definition.
  await page.getByRole('button', { name: 'Compare the partitions' }).click();
  const gives = page.getByRole('region', { name: 'What it gives' });
  await expect(gives.getByRole('table', { name: 'Stability index by characteristic, against development' })).toBeVisible();
  await expect(gives.getByRole('listitem').filter({ hasText: /by the values of \S+: (largest index \d\.\d{3}|nothing to compare with); / })).toHaveCount(1);
  await page.getByRole('button', { name: 'Confirm the definition' }).click();
  await expect(page.getByRole('region', { name: 'Confirmed definition' })).toBeVisible();
  await expect(page.getByText(/^One partition was compared before the definition was confirmed: by the values of /)).toBeVisible();
  await page.getByRole('link', { name: 'Quality', exact: true }).click();
  const flags = page.getByRole('region', { name: 'Flags and answers' });
  const flag = flags.getByRole('listitem').filter({ hasText: 'Nearly constant' });
  await expect(flag).toContainText('branch');
  await expect(flag).toContainText('99.3 % of the values are "B1"');
  await flag.getByRole('button', { name: 'Accept: branch, Nearly constant' }).click();
  const dialog = page.getByRole('dialog', { name: 'Accept this flag?' });
  await dialog.getByRole('button', { name: 'Accept' }).click();
  await expect(dialog).toContainText('Say why; it is kept in the record.');
  await dialog.getByLabel('Because').fill('The second branch opened in the last month only.');
  await dialog.getByRole('button', { name: 'Accept' }).click();
  await expect(dialog).toHaveCount(0);
  const answered = 'Accepted: The second branch opened in the last month only. Mara Modeller';
  await expect(flag).toContainText(answered);
  const before = await page.getByRole('region', { name: 'Quality by column' }).getByRole('row').allInnerTexts();
  await page.reload();
  await expect(flag).toContainText(answered);
  await expect(flag.getByRole('button', { name: 'Answer anew: branch, Nearly constant' })).toBeVisible();
  expect(await page.getByRole('region', { name: 'Quality by column' }).getByRole('row').allInnerTexts()).toEqual(before);
});
