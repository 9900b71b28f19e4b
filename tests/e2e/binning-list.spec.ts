import { Client } from 'pg';
import type {
  Binning,
  CharacteristicDetail,
  CharacteristicList,
  CharacteristicSummary,
} from '@tallystone/contracts/binnings/schema';
import type { Locator, Page } from '@playwright/test';
import { pick } from '../support/browser';
import { defineSample, enterEmptyModel, post, succeeded } from '../support/demo-places';
import { expect, test } from '../support/rooms';

/**
 * The list of characteristics of a binning of its own: many are classed anew by a run that is watched and cancelled, one is left out and taken in again, and
 * what is searched, shown and sorted stands in the address. Then one of them on the bench, whose cuts go to round numbers by a key.
 */
test.describe.configure({ mode: 'serial', timeout: 60_000 });

/** About how large each is, in the units of the invented file. */
const scales: Readonly<Record<string, number>> = {
  monthly_income: 2400,
  rent: 700,
  amount: 6000,
  savings: 3000,
  average_balance: 900,
  unsecured_balance: 4000,
  card_utilisation: 45,
  months_at_address: 60,
  months_in_job: 48,
  oldest_line_months: 90,
  overdrawn_days: 20,
  form_minutes: 14,
};
const numeric = Object.keys(scales);
const names = [...numeric, 'home', 'channel'];

/** Park and Miller, CACM 31, 1988: the same file on every machine. */
let state = 77;
const random = (): number => (state = (state * 48271) % 2147483647) / 2147483647;

/** Applicants whose risk the later columns tell better than the earlier ones, with none, one or two decimals. */
function applicants(rows: number): string {
  const lines = [['application_id', 'applied_on', ...names, 'bad'].join(',')];
  for (let row = 0; row < rows; row++) {
    const risk = random() + random() - 1;
    const values = numeric.map((name, place) =>
      (scales[name] * (0.2 + Math.abs(1 + (place / 12) * risk + (random() - 0.5)))).toFixed(place % 3),
    );
    const home = risk + random() < 0.3 ? 'owner' : ['rent', 'parents'][row % 2];
    const channel = ['branch', 'web', 'phone'][Math.floor(random() * 3)];
    const day = new Date(Date.UTC(2023, 0, 1 + (row % 700))).toISOString().slice(0, 10);
    const bad = random() < 1 / (1 + Math.exp(1.2 - 2.5 * risk)) ? 1 : 0;
    lines.push([`SM-${300_000 + row}`, day, ...values, home, channel, bad].join(','));
  }
  return `${lines.join('\n')}\n`;
}

let binningId = '';
let address = '';

test.beforeAll(async ({ roomOf }) => {
  const { page } = await roomOf('modeller');
  const { id } = await enterEmptyModel(
    page,
    `Overdrafts, classed in several ways ${Number(process.env['TEST_PARALLEL_INDEX']) + 1}`,
  );
  const { definitionId } = await defineSample(page, id, applicants(3000), (content) => ({
    ...content,
    partition: { by: 'seed', seed: 7, holdOutShare: 0.3, outOfTime: null },
  }));
  const binning = await post<Binning>(page, `/api/models/${id}/binnings`, { definitionId, name: 'First binning' });
  await succeeded(page, { id: binning.runId! });
  binningId = binning.id;
  address = `/models/${id}/binning/${binning.id}`;
});

test.afterEach(async ({ roomOf }) => {
  expect((await roomOf('modeller')).takeProblems(), 'errors, violations and refused requests').toEqual([]);
});

const listOf = (page: Page): Locator => page.getByRole('region', { name: 'Characteristics' });
const rowOf = (page: Page, column: string): Locator =>
  listOf(page)
    .getByRole('row')
    .filter({ has: page.getByRole('rowheader', { name: column, exact: true }) });
async function open(page: Page): Promise<void> {
  await page.goto(address);
  await expect(rowOf(page, 'form_minutes')).toBeVisible();
}
const shown = (page: Page): Promise<string[]> => listOf(page).getByRole('rowheader').allInnerTexts();
async function stored(page: Page): Promise<readonly CharacteristicSummary[]> {
  const { characteristics } = (await (
    await page.request.get(`/api/binnings/${binningId}/characteristics`)
  ).json()) as CharacteristicList;
  return characteristics;
}
async function detailOf(page: Page, column: string): Promise<CharacteristicDetail> {
  const { id } = (await stored(page)).find((one) => one.column === column)!;
  return (await (await page.request.get(`/api/binnings/${binningId}/characteristics/${id}`)).json()) as CharacteristicDetail;
}
/** The number of bins of every characteristic, as the list has it. */
async function binsShown(page: Page): Promise<Record<string, string>> {
  const headings = await listOf(page).getByRole('columnheader').allInnerTexts();
  // The first heading is that of the rows' own headings.
  const place = headings.findIndex((heading) => heading.trim() === 'Bins') - 1;
  const columns = await shown(page);
  return Object.fromEntries(
    await Promise.all(
      columns.map(async (column) => [column, await rowOf(page, column).getByRole('cell').nth(place).innerText()]),
    ),
  ) as Record<string, string>;
}
const binsOf = (list: readonly CharacteristicSummary[]): Record<string, string> =>
  Object.fromEntries(list.map(({ column, bins }) => [column, String(bins)]));

/** Classing anew reads the counts by month of each characteristic: while they are held it is under way. */
async function held<T>(work: (letGo: () => Promise<void>) => Promise<T>): Promise<T> {
  const client = new Client({ connectionString: process.env['TALLYSTONE_E2E_DATABASE'] });
  await client.connect();
  try {
    await client.query('BEGIN');
    await client.query('LOCK TABLE binning_months IN ACCESS EXCLUSIVE MODE');
    return await work(async () => void (await client.query('COMMIT')));
  } finally {
    await client.end();
  }
}

async function classAllAnew(page: Page, mostBins: string): Promise<void> {
  await page.getByRole('checkbox', { name: 'Choose all shown' }).check();
  await expect(page.getByText(`${names.length} characteristics chosen`)).toBeVisible();
  await page.getByRole('button', { name: 'Class anew…' }).click();
  const dialog = page.getByRole('dialog', { name: `Class ${names.length} characteristics anew` });
  await dialog.getByLabel('Most bins').fill(mostBins);
  await dialog.getByRole('button', { name: 'Class anew' }).click();
  await expect(dialog).toHaveCount(0);
}
const progress = (page: Page): Locator => page.getByRole('progressbar', { name: 'Classing anew' });

test('more than ten are classed anew by a run, which is watched wherever it was started', async ({ roomOf }) => {
  const { page } = await roomOf('modeller');
  await open(page);
  const before = await stored(page);
  expect(before).toHaveLength(names.length);
  expect(await binsShown(page)).toEqual(binsOf(before));

  await held(async (letGo) => {
    await classAllAnew(page, '3');
    await expect(progress(page)).toHaveAttribute('aria-valuenow', '0');
    // One at a time.
    await page.getByRole('checkbox', { name: 'Choose rent' }).check();
    await expect(page.getByRole('button', { name: 'Class anew…' })).toBeDisabled();
    expect(await binsShown(page)).toEqual(binsOf(before));
    await page.reload();
    await expect(progress(page)).toHaveAttribute('aria-valuenow', '0');
    await letGo();
    await expect(progress(page)).toHaveCount(0);
  });
  // Not more than three, beside one for what is missing.
  const after = await stored(page);
  await expect.poll(() => binsShown(page)).toEqual(binsOf(after));
  for (const column of numeric) {
    const { current, constraints } = await detailOf(page, column);
    expect(current.kind === 'numeric' && current.edges.length).toBeLessThanOrEqual(2);
    expect(constraints.mostBins).toBe(3);
  }
  expect(Number((await binsShown(page))['form_minutes'])).toBeLessThan(
    before.find(({ column }) => column === 'form_minutes')!.bins,
  );
});

test('the run is cancelled, and nothing of it is kept', async ({ roomOf }) => {
  const { page } = await roomOf('modeller');
  await open(page);
  const before = await stored(page);
  await held(async (letGo) => {
    await classAllAnew(page, '6');
    await expect(progress(page)).toHaveAttribute('aria-valuenow', '0');
    await page.getByRole('button', { name: 'Cancel' }).click();
    await expect(page.getByRole('button', { name: 'Stopping' })).toBeDisabled();
    await letGo();
    await expect(page.getByText('Classing anew was cancelled. Nothing of it was kept.')).toBeVisible();
  });
  expect(await stored(page)).toEqual(before);
  expect(await binsShown(page)).toEqual(binsOf(before));
  await page.reload();
  await expect.poll(() => binsShown(page)).toEqual(binsOf(before));
});

test('one is left out with its reason, and taken in again', async ({ roomOf }) => {
  const { page } = await roomOf('modeller');
  await open(page);
  await page.getByRole('checkbox', { name: 'Choose channel' }).check();
  await expect(page.getByRole('button', { name: 'Take in' })).toHaveCount(0);
  await page.getByRole('button', { name: 'Leave out…' }).click();
  const dialog = page.getByRole('dialog', { name: 'Leave channel out?' });
  await dialog.getByRole('button', { name: 'Leave out' }).click();
  await expect(dialog.getByRole('alert')).toHaveText('Say why; it is kept in the record.');
  await dialog.getByRole('radio', { name: 'Tells nobody apart' }).check();
  await dialog.getByRole('button', { name: 'Leave out' }).click();
  await expect(rowOf(page, 'channel')).toContainText('left out: Tells nobody apart');

  await pick(page, page, 'Show', 'Left out');
  await expect.poll(() => shown(page)).toEqual(['channel']);
  await page.reload();
  await expect(rowOf(page, 'channel')).toContainText('left out: Tells nobody apart');
  await page.getByRole('checkbox', { name: 'Choose channel' }).check();
  await expect(page.getByRole('button', { name: 'Leave out…' })).toHaveCount(0);
  await page.getByRole('button', { name: 'Take in' }).click();
  await expect(listOf(page)).toContainText('No characteristic fits this search.');
  await pick(page, page, 'Show', 'All');
  await expect(rowOf(page, 'channel')).toContainText('included');
  expect((await stored(page)).every(({ included }) => included)).toBe(true);
});

test('search, part and order stand in the address and are there after a reload', async ({ roomOf }) => {
  const { page } = await roomOf('modeller');
  await open(page);
  const heading = (name: string): Locator => listOf(page).getByRole('columnheader', { name: new RegExp(`^${name}`) });
  const byIv = [...(await stored(page))].sort((a, b) => b.informationValue - a.informationValue).map(({ column }) => column);
  await expect.poll(() => shown(page)).toEqual(byIv);
  await expect(heading('IV').first()).toHaveAttribute('aria-sort', 'descending');
  await heading('Characteristic').getByRole('button').click();
  await expect.poll(() => shown(page)).toEqual([...names].sort());
  await page.getByRole('searchbox', { name: 'Characteristic' }).fill('month');
  const found = [...names].sort().filter((name) => name.includes('month'));
  await expect.poll(() => shown(page)).toEqual(found);
  await pick(page, page, 'Show', 'Included');
  await expect(page).toHaveURL(/sort=column\.up/);
  await expect(page).toHaveURL(/search=month/);
  await expect(page).toHaveURL(/show=included/);

  await page.reload();
  await expect.poll(() => shown(page)).toEqual(found);
  await expect(page.getByRole('searchbox', { name: 'Characteristic' })).toHaveValue('month');
  await expect(page.getByRole('combobox', { name: 'Show' })).toHaveText('Included');
  await expect(heading('Characteristic')).toHaveAttribute('aria-sort', 'ascending');
  await heading('Characteristic').getByRole('button').click();
  await expect.poll(() => shown(page)).toEqual([...found].reverse());
});

test('a key takes a cut on the bench to a round number, and undo gives it back', async ({ roomOf }) => {
  const { page } = await roomOf('modeller');
  await open(page);
  await rowOf(page, 'amount').getByRole('link').click();
  const cuts = page.getByRole('slider', { name: /^Cut \d+ of/ });
  const edits = page.getByRole('region', { name: 'Edits by hand' });
  await expect(cuts).toHaveCount(2);
  const values = (): Promise<number[]> =>
    cuts.evaluateAll((notches) => notches.map((notch) => Number(notch.getAttribute('aria-valuenow'))));
  const start = await values();
  const digits = (value: number): number => String(value).replace('.', '').replace(/0+$/, '').length;

  // What the keys do is told under the question mark.
  await page.keyboard.press('?');
  const list = page.getByRole('dialog', { name: 'Shortcuts' });
  await expect(list).toContainText('Move the selected cut to a round number');
  await page.keyboard.press('Escape');
  await expect(list).toHaveCount(0);

  // Cuts that were classed are round; two are typed that are not.
  const typed: number[] = [];
  for (const [place, value] of start.entries()) {
    typed[place] = value + 1.37;
    await cuts.nth(place).focus();
    await page.keyboard.press('Enter');
    await page.getByRole('spinbutton', { name: 'Selected cut at' }).fill(String(typed[place]));
    await page.keyboard.press('Enter');
    await expect.poll(async () => (await values())[place]).toBe(typed[place]);
  }
  await cuts.first().focus();
  await page.keyboard.press('r');
  // As the axis writes it, with a narrow blank before three digits.
  await expect(edits).toContainText(`Cut moved from ${String(typed[0]).replace(/(\d)(?=\d{3}(\.|$))/, '$1\u202F')} to `);
  const [first, untouched] = await values();
  expect(digits(first)).toBeLessThan(digits(typed[0]));
  expect(untouched).toBe(typed[1]);
  // The second one by the page's own shortcut: what is selected is moved, wherever the focus is. The button says where to.
  await cuts.nth(1).click();
  const words = await page.getByRole('button', { name: /^Round to / }).innerText();
  const to = Number(/^Round to (.*)$/.exec(words)![1].replaceAll(/\s/g, ''));
  await edits.getByRole('heading', { name: 'Edits by hand' }).click();
  await page.keyboard.press('r');
  await expect.poll(values).toEqual([first, to]);
  expect(digits(to)).toBeLessThan(digits(typed[1]));
  // Round already, there is nowhere to go.
  await expect(page.getByRole('button', { name: 'Round already' })).toBeDisabled();
  await page.keyboard.press('r');
  expect(await values()).toEqual([first, to]);
  await expect.poll(async () => (await detailOf(page, 'amount')).current).toMatchObject({ edges: [first, to] });

  await page.keyboard.press('Control+z');
  await expect.poll(values).toEqual([first, typed[1]]);
  await page.keyboard.press('Control+z');
  await expect.poll(values).toEqual(typed);
  await page.keyboard.press('Control+z');
  await page.keyboard.press('Control+z');
  await expect.poll(values).toEqual(start);
  await expect(edits).toContainText('as they were classed automatically');
  await expect.poll(async () => (await detailOf(page, 'amount')).edits).toBe(0);
  expect((await detailOf(page, 'amount')).current).toMatchObject({ edges: start });
});
